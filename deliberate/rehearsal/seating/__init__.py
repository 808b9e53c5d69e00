"""Mixed tables: `wish` says what is wanted and what came of it, `seat` finds it, `told` and `sheet` tell it."""
