"""``python -m laplace_verify``: the command line."""

from laplace_verify.cli import main

raise SystemExit(main())
