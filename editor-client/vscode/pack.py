"""Put the built extension into bandwright.vsix, the same bytes for the same files: ``npm run package``.

A .vsix is a zip of the extension's files, a manifest and a list of content types.
"""

from __future__ import annotations

import json
import zipfile
from pathlib import Path
from xml.sax.saxutils import escape, quoteattr

HERE = Path(__file__).resolve().parent
FILES = {
    "package.json": HERE / "package.json",
    "README.md": HERE / "README.md",
    "CHANGELOG.md": HERE / "CHANGELOG.md",
    "LICENSE.txt": HERE.parents[1] / "LICENSE",
    "dist/extension.js": HERE / "dist" / "extension.js",
    "images/icon.png": HERE / "images" / "icon.png",
    "language-configuration.json": HERE / "language-configuration.json",
    "syntaxes/bands.tmLanguage.json": HERE / "syntaxes" / "bands.tmLanguage.json",
}
"""Path in the extension's folder -> the file that goes there."""

CONTENT_TYPES = """<?xml version="1.0" encoding="utf-8"?>
<Types xmlns="http://schemas.openxmlformats.org/package/2006/content-types">
<Default Extension=".js" ContentType="application/javascript"/>
<Default Extension=".json" ContentType="application/json"/>
<Default Extension=".md" ContentType="text/markdown"/>
<Default Extension=".png" ContentType="image/png"/>
<Default Extension=".txt" ContentType="text/plain"/>
<Default Extension=".vsixmanifest" ContentType="text/xml"/>
</Types>
"""


ASSETS = {
    "Microsoft.VisualStudio.Code.Manifest": "package.json",
    "Microsoft.VisualStudio.Services.Content.Details": "README.md",
    "Microsoft.VisualStudio.Services.Content.Changelog": "CHANGELOG.md",
    "Microsoft.VisualStudio.Services.Content.License": "LICENSE.txt",
    "Microsoft.VisualStudio.Services.Icons.Default": "images/icon.png",
}
"""What a file is for -> the file."""


def manifest() -> str:
    package = json.loads(FILES["package.json"].read_text(encoding="utf-8"))
    name, version, publisher = (quoteattr(package[key]) for key in ("name", "version", "publisher"))
    assets = "\n".join(
        f'<Asset Type="{kind}" Path="extension/{file}" Addressable="true"/>' for kind, file in ASSETS.items()
    )
    return f"""<?xml version="1.0" encoding="utf-8"?>
<PackageManifest Version="2.0.0" xmlns="http://schemas.microsoft.com/developer/vsx-schema/2011">
<Metadata>
<Identity Language="en-US" Id={name} Version={version} Publisher={publisher}/>
<DisplayName>{escape(package["displayName"])}</DisplayName>
<Description xml:space="preserve">{escape(package["description"])}</Description>
<Tags>{escape(",".join(package["keywords"]))}</Tags>
<Categories>{escape(",".join(package["categories"]))}</Categories>
<License>extension/LICENSE.txt</License>
<Icon>extension/images/icon.png</Icon>
<Properties>
<Property Id="Microsoft.VisualStudio.Code.Engine" Value={quoteattr(package["engines"]["vscode"])}/>
</Properties>
</Metadata>
<Installation><InstallationTarget Id="Microsoft.VisualStudio.Code"/></Installation>
<Dependencies/>
<Assets>
{assets}
</Assets>
</PackageManifest>
"""


def main() -> None:
    contents = {f"extension/{name}": file.read_bytes() for name, file in FILES.items()}
    contents["extension.vsixmanifest"] = manifest().encode()
    contents["[Content_Types].xml"] = CONTENT_TYPES.encode()
    with zipfile.ZipFile(HERE / "bandwright.vsix", "w") as vsix:
        # Fixed dates and no compression: nothing depends on the machine or on its zlib.
        for name in sorted(contents):
            entry = zipfile.ZipInfo(name, date_time=(2026, 1, 1, 0, 0, 0))
            entry.external_attr = 0o644 << 16
            vsix.writestr(entry, contents[name])


if __name__ == "__main__":
    main()
