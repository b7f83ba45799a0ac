"""Lathbook's settings, read top to bottom. Everything that varies comes from the
environment through `jobs.config.env`, where each name is described."""

from __future__ import annotations

import os
import secrets
import sys
from pathlib import Path
from urllib.parse import unquote, urlparse

from django.core.exceptions import ImproperlyConfigured

from jobs.config import env

BASE_DIR = Path(__file__).resolve().parent.parent.parent
environment = env.Environment()

# Paths
DATA_DIR = environment.folder("LATHBOOK_DATA_DIR", BASE_DIR / ".lathbook")
PHOTO_DIR = DATA_DIR / "photos"
KEY_DIR = DATA_DIR / "keys"

# Security
DEBUG = environment.switch("LATHBOOK_DEBUG")


def kept_secret(path: Path) -> str:
    """The session secret of this installation, made once and readable by its user."""
    if not path.exists():
        try:
            descriptor = os.open(path, os.O_CREAT | os.O_EXCL | os.O_WRONLY, 0o600)
        except FileExistsError:
            return path.read_text()
        with os.fdopen(descriptor, "w") as file:
            file.write(secrets.token_urlsafe(50))
    return path.read_text()


SECRET_KEY = environment.text("LATHBOOK_SECRET_KEY") or kept_secret(DATA_DIR / "secret")
ALLOWED_HOSTS = [
    host.strip()
    for host in environment.text(
        "LATHBOOK_ALLOWED_HOSTS", "localhost,127.0.0.1,[::1]"
    ).split(",")
    if host.strip()
]
HTTPS = environment.switch("LATHBOOK_HTTPS")
SESSION_COOKIE_SECURE = CSRF_COOKIE_SECURE = HTTPS
SESSION_COOKIE_HTTPONLY = True
SESSION_COOKIE_AGE = 14 * 24 * 3600
SECURE_SSL_REDIRECT = HTTPS
SECURE_HSTS_SECONDS = 31_536_000 if HTTPS else 0
SECURE_PROXY_SSL_HEADER = ("HTTP_X_FORWARDED_PROTO", "https") if HTTPS else None
SECURE_REFERRER_POLICY = "same-origin"
X_FRAME_OPTIONS = "DENY"
if HTTPS:
    CSRF_TRUSTED_ORIGINS = [f"https://{h.lstrip('.')}" for h in ALLOWED_HOSTS]

# Apps, door, addresses
INSTALLED_APPS = [
    "django.contrib.auth",
    "django.contrib.contenttypes",
    "django.contrib.sessions",
    "django.contrib.messages",
    "django.contrib.staticfiles",
    "django_htmx",
    "rest_framework",
    "drf_spectacular",
    "stakes",
    "jobs",
    "jobs.config",
]
MIDDLEWARE = [
    "django.middleware.security.SecurityMiddleware",
    "whitenoise.middleware.WhiteNoiseMiddleware",
    "jobs.config.headers.ContentSecurityPolicy",
    "django.contrib.sessions.middleware.SessionMiddleware",
    "django.middleware.common.CommonMiddleware",
    "django.middleware.csrf.CsrfViewMiddleware",
    "django.contrib.auth.middleware.AuthenticationMiddleware",
    "django.contrib.messages.middleware.MessageMiddleware",
    "django.middleware.clickjacking.XFrameOptionsMiddleware",
    "django_htmx.middleware.HtmxMiddleware",
    "jobs.door.Door",
]
ROOT_URLCONF = "jobs.config.urls"
WSGI_APPLICATION = "jobs.config.wsgi.application"
APPEND_SLASH = True

# Database
DATABASE_URL = environment.text("DATABASE_URL")
OWNER_DATABASE_URL = environment.text("LATHBOOK_OWNER_DATABASE_URL")
if OWNER_DATABASE_URL and not DATABASE_URL:
    raise ImproperlyConfigured(
        "LATHBOOK_OWNER_DATABASE_URL is set but DATABASE_URL is not. Set DATABASE_URL "
        "to the web role's address, or remove both to use the embedded database."
    )
if DATABASE_URL:
    DATABASES = {"default": env.postgres("DATABASE_URL", DATABASE_URL)}
    if OWNER_DATABASE_URL and len(sys.argv) > 1 and sys.argv[1] == "migrate":
        DATABASES["default"] = env.postgres(
            "LATHBOOK_OWNER_DATABASE_URL", OWNER_DATABASE_URL
        )
else:
    DATABASES = {"default": env.sqlite(DATA_DIR / "lathbook.sqlite3")}
DEFAULT_AUTO_FIELD = "django.db.models.BigAutoField"

# Templates and static files
TEMPLATES = [
    {
        "BACKEND": "django.template.backends.django.DjangoTemplates",
        "DIRS": [BASE_DIR / "jobs" / "config" / "templates"],
        "APP_DIRS": True,
        "OPTIONS": {
            "context_processors": [
                "django.template.context_processors.request",
                "django.contrib.auth.context_processors.auth",
                "django.contrib.messages.context_processors.messages",
                "jobs.config.context.house",
            ],
        },
    }
]
STATIC_URL = "/static/"
STATIC_ROOT = DATA_DIR / "static"
STATIC_ROOT.mkdir(exist_ok=True)
# Files are served from the packages themselves: nothing to collect before the first start.
WHITENOISE_USE_FINDERS = True
WHITENOISE_AUTOREFRESH = DEBUG

# People
AUTH_USER_MODEL = "jobs.User"
PASSWORD_HASHERS = [
    "django.contrib.auth.hashers.Argon2PasswordHasher",
    "django.contrib.auth.hashers.PBKDF2PasswordHasher",
]
AUTH_PASSWORD_VALIDATORS = [
    {
        "NAME": "django.contrib.auth.password_validation.MinimumLengthValidator",
        "OPTIONS": {"min_length": 10},
    },
    {"NAME": "django.contrib.auth.password_validation.CommonPasswordValidator"},
    {
        "NAME": "django.contrib.auth.password_validation.UserAttributeSimilarityValidator"
    },
]
LOGIN_URL = "sign-in"
LOGIN_REDIRECT_URL = "start"
LOGOUT_REDIRECT_URL = "sign-in"

# Time: stored in UTC, shown in the zone of the job
USE_TZ = True
TIME_ZONE = "UTC"
LANGUAGE_CODE = "en-us"
USE_I18N = False

# Uploads: what is larger is refused with a sentence where it is read
DATA_UPLOAD_MAX_MEMORY_SIZE = 12 * 1024 * 1024
FILE_UPLOAD_MAX_MEMORY_SIZE = 2 * 1024 * 1024
DATA_UPLOAD_MAX_NUMBER_FIELDS = 20_000

# API
REST_FRAMEWORK = {
    "DEFAULT_AUTHENTICATION_CLASSES": ["jobs.door.DoorAuthentication"],
    "DEFAULT_PERMISSION_CLASSES": ["rest_framework.permissions.IsAuthenticated"],
    "DEFAULT_RENDERER_CLASSES": ["rest_framework.renderers.JSONRenderer"],
    "DEFAULT_PARSER_CLASSES": ["rest_framework.parsers.JSONParser"],
    "DEFAULT_SCHEMA_CLASS": "drf_spectacular.openapi.AutoSchema",
    "UNAUTHENTICATED_USER": "django.contrib.auth.models.AnonymousUser",
}
SPECTACULAR_SETTINGS = {
    "TITLE": "Lathbook",
    "DESCRIPTION": "The record of a survey firm's stakes.",
    "VERSION": "1",
    "SERVE_PERMISSIONS": ["rest_framework.permissions.AllowAny"],
}

# Work
BROKER_URL = environment.choice_of_scheme("LATHBOOK_BROKER_URL", ("redis", "rediss"))
EAGER_WORK = environment.switch("LATHBOOK_EAGER_WORK")

# Mail
MAIL_URL = environment.choice_of_scheme(
    "LATHBOOK_MAIL_URL", ("smtp", "smtps", "console", "file")
)
_mail = urlparse(MAIL_URL or "console:")
EMAIL_BACKEND = {
    "console": "django.core.mail.backends.console.EmailBackend",
    "file": "django.core.mail.backends.filebased.EmailBackend",
    "smtp": "django.core.mail.backends.smtp.EmailBackend",
    "smtps": "django.core.mail.backends.smtp.EmailBackend",
}[_mail.scheme]
EMAIL_FILE_PATH = _mail.path or str(DATA_DIR / "mail")
EMAIL_HOST = _mail.hostname or "localhost"
EMAIL_PORT = _mail.port or (465 if _mail.scheme == "smtps" else 25)
EMAIL_HOST_USER = unquote(_mail.username or "")
EMAIL_HOST_PASSWORD = unquote(_mail.password or "")
EMAIL_USE_SSL = _mail.scheme == "smtps"
EMAIL_TIMEOUT = 20
DEFAULT_FROM_EMAIL = environment.text("LATHBOOK_MAIL_FROM", "lathbook@localhost")
FIRM = environment.text("LATHBOOK_FIRM", "Survey firm")

# Logging
LOGGING = {
    "version": 1,
    "disable_existing_loggers": False,
    "formatters": {
        "line": {"format": "%(asctime)s %(levelname)s %(name)s %(message)s"}
    },
    "handlers": {"console": {"class": "logging.StreamHandler", "formatter": "line"}},
    "root": {"handlers": ["console"], "level": "WARNING"},
    "loggers": {
        "lathbook": {"handlers": ["console"], "level": "INFO", "propagate": False}
    },
}
