"""From a project to rows: built once, rewritten a stage at a time."""

from .plan import NodeRef, Plan, build_plan, redrawn, rewritten

__all__ = ["NodeRef", "Plan", "build_plan", "redrawn", "rewritten"]
