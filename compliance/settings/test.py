"""Settings of the test suite: quick hashes, a data folder of its own, the database that DATABASE_URL names."""

import atexit
import os
import shutil
import tempfile
from pathlib import Path

_folder = tempfile.mkdtemp(prefix="gramledger-test-")
atexit.register(shutil.rmtree, _folder, ignore_errors=True)
os.environ["GRAMLEDGER_DATA"] = _folder

from compliance.settings import *  # noqa: E402, F403  (settings are read after the folder is set)
from compliance.settings import DATABASES, STORAGES  # noqa: E402

if "sqlite" in str(DATABASES["default"]["ENGINE"]):
    DATABASES["default"]["TEST"] = {"NAME": str(Path(_folder) / "test.sqlite3")}  # a file: tests use threads
DATA = Path(_folder)  # the package above this file was read first, before the folder was set
ATTACHMENTS, STATIC_ROOT = DATA / "attachments", DATA / "static"
STATIC_ROOT.mkdir()
PASSWORD_HASHERS = ["django.contrib.auth.hashers.MD5PasswordHasher"]
STORAGES["staticfiles"] = {"BACKEND": "django.contrib.staticfiles.storage.StaticFilesStorage"}
AXES_ENABLED = False
JOB_LEASE_SECONDS = 60
