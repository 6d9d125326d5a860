"""The ledger's shop, for balances."""

from tests.ledger.conftest import shop

__all__ = ["shop"]
