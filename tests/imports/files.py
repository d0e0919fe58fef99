"""GPX written by hand from the standard.

GPX 1.1 Schema Documentation (Topografix, topografix.com/GPX/1/1): element order and names, `wpt`
with `ele`, `time`, `name`, `cmt`, `desc`, `sym`, `type`, `extensions`; decimal degrees, WGS 84, UTC.
"""

from __future__ import annotations

HANDHELD = """<?xml version="1.0" encoding="UTF-8" standalone="no"?>
<gpx xmlns="http://www.topografix.com/GPX/1/1" xmlns:u="urn:example:handheld" version="1.1" creator="A handheld"
 xmlns:xsi="http://www.w3.org/2001/XMLSchema-instance"
 xsi:schemaLocation="http://www.topografix.com/GPX/1/1 http://www.topografix.com/GPX/1/1/gpx.xsd">
  <metadata><name>Two days</name><time>2026-03-05T18:00:00Z</time>
    <bounds minlat="-20.1" minlon="66.0" maxlat="-19.9" maxlon="66.2"/></metadata>
  <wpt lat="-19.97" lon="66.05"><ele>412.5</ele><time>2026-03-04T05:00:00Z</time><name>Ridge foot</name>
    <cmt>flag on a cairn</cmt><sym>Flag</sym><extensions><u:depth>3</u:depth></extensions></wpt>
  <wpt lat="-20.01" lon="66.11"><name>\u0639\u0644\u0627\u0645\u0629</name><desc>second site</desc></wpt>
  <wpt lat="-20.02" lon="66.12"/>
  <rte><name>The plan</name><rtept lat="-20.0" lon="66.1"/></rte>
  <trk><name>Morning</name><src>chip</src><number>1</number>
    <trkseg>
      <trkpt lat="-20.0" lon="66.0"><ele>400</ele><time>2026-03-04T05:06:00Z</time><hdop>1.2</hdop></trkpt>
      <trkpt lat="-20.0" lon="66.001"><ele>402</ele><time>2026-03-04T05:07:00Z</time></trkpt>
      <trkpt lat="-20.0" lon="66.002"><ele>404</ele><time>2026-03-04T09:37:00+04:30</time></trkpt>
    </trkseg>
    <trkseg>
      <trkpt lat="-20.0" lon="66.01"><time>2026-03-04T06:00:00.250Z</time></trkpt>
      <trkpt lat="-20.0" lon="66.02"><time>2026-03-04T08:00:00Z</time></trkpt>
    </trkseg>
    <trkseg/>
  </trk>
</gpx>
"""
"""Waypoints with and without names, a route, a track in segments with a pause and a time in another zone."""

UNTIMED = """<?xml version="1.0"?>
<gpx version="1.0" creator="An old one" xmlns="http://www.topografix.com/GPX/1/0">
  <trk><trkseg><trkpt lat="1" lon="2"/><trkpt lat="1.001" lon="2"><time>when it was late</time></trkpt></trkseg></trk>
</gpx>
"""

IMPOSSIBLE = """<gpx version="1.1" creator="x" xmlns="http://www.topografix.com/GPX/1/1">
  <wpt lat="91" lon="10"><name>Over the pole</name></wpt>
  <wpt lat="nan" lon="10"><name>Nowhere</name></wpt>
  <wpt lat="20" lon="10.5"><name>Somewhere</name></wpt>
  <trk><name>Walk</name><trkseg><trkpt lat="20" lon="181"/><trkpt lat="20" lon="10"/></trkseg></trk>
</gpx>
"""

# Known as "billion laughs": ten entities, each ten of the one before.
BOMB = '<?xml version="1.0"?><!DOCTYPE gpx [<!ENTITY a "aaaaaaaaaa">' + "".join(
    f'<!ENTITY {this} "{f"&{before};" * 10}">' for before, this in zip("abcdefghi", "bcdefghij", strict=True)
) + ']><gpx version="1.1" creator="x"><wpt lat="1" lon="2"><name>&j;</name></wpt></gpx>'

OUTSIDE = (
    '<!DOCTYPE gpx [<!ENTITY secret SYSTEM "file:///etc/hostname">]>'
    '<gpx version="1.1" creator="x"><wpt lat="1" lon="2"><name>&secret;</name></wpt></gpx>'
)
