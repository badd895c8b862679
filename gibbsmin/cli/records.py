"""gibbsmin species and gibbsmin reaction."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from gibbsmin.cli.app import AsJson, Temperatures, app
from gibbsmin.cli.output import print_json, print_view
from gibbsmin.errors import InputError, UnknownSpeciesError

if TYPE_CHECKING:
    from gibbsmin.arrays import FloatArray
    from gibbsmin.thermo.library import Library
    from gibbsmin.thermo.species import Species


@app.command(short_help="Find species records, and show one in full.")
def species(
    text: Annotated[
        str, typer.Argument(metavar="TEXT", help="A record, formula, name or CAS number.")
    ] = "",
    name: Annotated[str, typer.Option(help="A common name or a part of one.")] = "",
    cas: Annotated[str, typer.Option("--cas", help="A CAS registry number.")] = "",
    elements: Annotated[
        str, typer.Option(help='Records made of these elements alone, such as "C,H,O".')
    ] = "",
    temperature: Temperatures = None,
    file: Annotated[
        str, typer.Option("--file", metavar="FILE", help="A library file of your own to check.")
    ] = "",
    as_json: AsJson = False,
) -> None:
    """Find species records, and show one in full: values, uncertainties, range, sources.

    With --file show and check the records of a library file.
    """
    from gibbsmin.present.species_view import (
        species_document,
        species_list_view,
        species_view,
        usual_temperatures,
    )
    from gibbsmin.thermo.library import load_library
    from gibbsmin.thermo.temperatures import read_temperatures

    if file:
        _show_own(Path(file), read_temperatures(temperature or ()), as_json)
        return
    if not (text or name or cas or elements):
        raise InputError(
            "found nothing to look for",
            'accepted is a formula, a name or a CAS number, or --elements "C,H,O"',
        )
    library = load_library()
    temperatures = read_temperatures(temperature or ())
    records = library.find(
        text, name=name, cas=cas, elements=elements.split(",") if elements else ()
    )
    if not records:
        raise _nothing_found(library, text, name, cas)
    if as_json:
        chosen = [
            temperatures if temperature else usual_temperatures(r.T_low, r.T_high) for r in records
        ]
        documents = [
            species_document(record, T, library) for record, T in zip(records, chosen, strict=True)
        ]
        print_json({"species": documents})
    elif len(records) > 1:
        print_view(species_list_view(records))
    else:
        (record,) = records
        chosen_T = temperatures if temperature else usual_temperatures(record.T_low, record.T_high)
        print_view(species_view(record, chosen_T, library))


@app.command(short_help="Show a reaction's enthalpy, entropy and constant.")
def reaction(
    text: Annotated[
        str, typer.Argument(metavar="REACTION", help='Such as "CH4 + 2 H2O = CO2 + 4 H2".')
    ],
    temperature: Temperatures = None,
    file: Annotated[
        str, typer.Option("--file", metavar="FILE", help="A library file of your own to use.")
    ] = "",
    as_json: AsJson = False,
) -> None:
    """Show ΔrH, ΔrS, ΔrG and log10 K of a reaction, and its path by way of 298.15 K.

    H2O(g) means that form at all temperatures, H2O whichever form is stable.
    """
    from gibbsmin.jobs.reaction import reaction as study_of
    from gibbsmin.jobs.remarks import own_records_notes
    from gibbsmin.present.reaction_view import reaction_document, reaction_view
    from gibbsmin.present.species_view import usual_temperatures
    from gibbsmin.thermo.library import load_library
    from gibbsmin.thermo.temperatures import read_temperatures

    temperatures = (
        read_temperatures(temperature) if temperature else usual_temperatures(298.15, 1500.0)
    )
    library = load_library()
    own: tuple[Species, ...] = ()
    if file:
        from gibbsmin.jobs.own_library import read_library_file

        own = read_library_file(Path(file), library).records
    study = study_of(text, temperatures, library.overruled(own))
    taking_part = [form for _, substance in study.reaction.terms for form in substance.forms]
    notes = own_records_notes(record for record in own if record in taking_part)
    if as_json:
        print_json({**reaction_document(study), **({"notes": list(notes)} if notes else {})})
    else:
        print_view(reaction_view(study))
        for note in notes:
            print_view(note)


def _show_own(path: Path, temperatures: FloatArray, as_json: bool) -> None:
    from gibbsmin.jobs.own_library import read_library_file
    from gibbsmin.present.own_records_view import own_records_document, own_records_view
    from gibbsmin.thermo.library import load_library

    library = load_library()
    own = read_library_file(path, library)
    if as_json:
        print_json(own_records_document(own, temperatures, library))
    else:
        print_view(own_records_view(own, temperatures, library))


def _nothing_found(library: Library, text: str, name: str, cas: str) -> UnknownSpeciesError:
    """Blames the first condition that no record meets by itself, or all of them together."""
    if text and not library.find(text):
        return library.unknown(text)
    if name and not library.find(name=name):
        return library.unknown(name)
    if cas and not library.find(cas=cas):
        return library.unknown(cas)
    return UnknownSpeciesError(
        "found no record that meets all the conditions", "accepted are fewer conditions"
    )
