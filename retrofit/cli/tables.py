"""Commands that print what is known of refrigerants."""

from __future__ import annotations

import click

from retrofit.cli.options import json_option, units_option
from retrofit.cli.shell import columns, guarded, print_json, say_build, strong


@click.command()
@click.argument("names", nargs=-1, metavar="[NAME]...")
@json_option
@guarded
def refrigerants(names: tuple[str, ...], as_json: bool) -> None:
    """List the refrigerants of the catalogue, or show NAMEs with the source of every value."""
    from retrofit.refrigerants import designations, find
    from retrofit.report.catalogue import catalogue_json, catalogue_text, refrigerant_text

    chosen = [find(name) for name in names or designations()]
    if as_json:
        print_json(catalogue_json(chosen))
    elif names:
        click.echo("\n\n".join(refrigerant_text(item, columns(), strong()) for item in chosen))
    else:
        click.echo(catalogue_text(chosen, strong()))


@click.command()
@click.argument("name", metavar="REFRIGERANT")
@click.option("--from", "start", default="-40 degC", show_default=True, help='First temperature, such as "-40 degC".')
@click.option("--to", "stop", default="60 degC", show_default=True, help='Last temperature, such as "140 degF".')
@click.option("--step", default="5 K", show_default=True, help='Step, such as "1 K".')
@click.option("--altitude", default="0 m", show_default=True, help='Height that gauges stand at, such as "1500 m".')
@units_option
@json_option
@guarded
def pt(name: str, start: str, stop: str, step: str, altitude: str, units: str, as_json: bool) -> None:
    """Print bubble and dew pressures of a REFRIGERANT against temperature."""
    from retrofit.report.saturation import air_at, saturation_json, saturation_text, temperature_steps
    from retrofit.study.saturation import saturation_table
    from retrofit.units import UNIT_SYSTEMS

    air = air_at(altitude)
    table = saturation_table(name, temperature_steps(start, stop, step), say_build)
    if as_json:
        print_json(saturation_json(table, air))
    else:
        click.echo(saturation_text(table, UNIT_SYSTEMS[units], columns(), strong(), air))
