"""`ergbook demo`: an invented survey to look at, with a way in for the lead and one for a phone."""

from __future__ import annotations

import io

import click

LEAD = "Demo lead"


@click.command()
@click.option("--load-only", is_flag=True, help="Load the demonstration survey into the store and exit.")
@click.option("--port", type=click.IntRange(1, 65535), help="Port (ERGBOOK_PORT).")
def demo(load_only: bool, port: int | None) -> None:
    """Load the invented demonstration survey, serve it, and print the ways in.

    Starting it again goes on with what is there.
    """
    import segno

    from fieldlog.cli.serve import run
    from fieldlog.people.service import add_lead, lead_named, make_joining_code, sign_in_link
    from fieldlog.store.photos import PhotoFolder
    from fieldlog.store.transaction import write
    from fieldlog.surveys.ledger_file import load_ledger
    from fieldlog.web.app import create_app
    from fieldlog.web.folders import base_folder
    from fieldlog.web.settings import Settings

    settings = Settings.from_environment(port=port)
    app = create_app(settings)
    with app.app_context():
        with write() as session:
            loaded = load_ledger(session, base_folder() / "demo_survey", PhotoFolder(settings.data_dir / "photos"))
        click.echo(f"Demonstration survey {loaded.survey}: {loaded.entries} entries, {loaded.entries_new} of them new.")
        if load_only:
            return
        with write() as session:
            lead = lead_named(session, LEAD) or add_lead(session, LEAD, None)
            token = sign_in_link(session, lead.id)
            code = make_joining_code(session, loaded.survey, secret=str(app.secret_key), who=LEAD, hours=24)
    link = f"{settings.address}/phone/#join={code}"
    picture = io.StringIO()
    segno.make(link, error="l").terminal(picture, compact=True)
    lines = [
        f"Ergbook serves at {settings.address}",
        "",
        f"Lead, once:  {settings.address}/way-in/{token}",
        f"A phone:     {link}",
        f"             joining code {code}, for 24 hours",
        "",
        picture.getvalue(),
    ]
    if not settings.address.startswith("https:"):
        lines.append(
            "A phone of its own needs https (ERGBOOK_TLS_CERTIFICATE, ERGBOOK_TLS_KEY); "
            "on this machine open the link in a narrow window."
        )
    run(app, settings, lines)
