"""Whole-number arithmetic of amounts and their standard uncertainties.

Uncertainties are propagated to first order, as if the factors were independent (GUM, JCGM 100:2008, 5.1.2), and are
rounded up: the books are never more certain than computed. The books keep no covariances.
"""

import math


def ratio(amount: int, part: int, whole: int) -> int:
    """Return amount x part // whole; taking the whole takes every unit."""
    return amount * part // whole


def ceiling(dividend: int, divisor: int) -> int:
    """Return the quotient rounded up."""
    return -(-dividend // divisor)


def root(variance: int) -> int:
    """Return the standard uncertainty, rounded up."""
    return 0 if variance <= 0 else math.isqrt(variance - 1) + 1


def product(amount: int, sd: int, factor: int, factor_sd: int, per: int) -> tuple[int, int]:
    """Return amount x factor // per, and its standard uncertainty."""
    variance = (sd * factor) ** 2 + (amount * factor_sd) ** 2
    return amount * factor // per, root(ceiling(variance, per * per))


def quotient(amount: int, sd: int, divisor: int, divisor_sd: int, times: int) -> tuple[int, int]:
    """Return amount x times // divisor, and its standard uncertainty. The divisor is above zero."""
    variance = times**2 * ((sd * divisor) ** 2 + (amount * divisor_sd) ** 2)
    return amount * times // divisor, root(ceiling(variance, divisor**4))


def scaled(
    amount: int, variance: int, part: int, part_sd: int, whole: int, whole_variance: int
) -> tuple[int, int, int]:
    """Return amount x part // whole, its variance, and the variance of the difference to the amount.

    Both share the doubt about the fraction, which is never larger than everything.
    """
    doubt = min(part_sd, max(part, whole)) ** 2 * whole**2 + part**2 * min(whole_variance, whole**2)
    now = variance * part**2 * whole**2 + amount**2 * doubt
    difference = variance * (whole - part) ** 2 * whole**2 + amount**2 * doubt
    return ratio(amount, part, whole), ceiling(now, whole**4), ceiling(difference, whole**4)


def portion(
    amount: int, variance: int, part: int, part_sd: int, whole: int, whole_variance: int
) -> tuple[int, int, int]:
    """Return what goes along with a part of a liquid: amount, its variance, and the variance of what is left.

    ``part`` of ``whole`` was taken; no more than everything goes along, and less than nothing does not.
    """
    return scaled(max(amount, 0), variance, min(part, whole), part_sd, whole, whole_variance)
