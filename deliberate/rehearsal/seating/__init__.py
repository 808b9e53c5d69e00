"""Mixed tables: `wish` says what is wanted and what came of it, `seat` finds it, `plan` puts it into
the plan, `told` and `sheet` tell it."""
