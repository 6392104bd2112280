"""What a person declares with a detached signature, under it: the content hints of RFC 2634, 2.9."""

from __future__ import annotations

import datetime
from collections.abc import Iterable

from asn1crypto import cms, core
from pyhanko.sign.attributes import (
    CMSAttributeProvider,
    SignedAttributeProviderSpec,
    SigningCertificateV2Provider,
    SigningTimeProvider,
)
from pyhanko.sign.signers import Signer

_OID = "1.2.840.113549.1.9.16.2.4"
_NAME = "content_hint"


class _ContentHints(core.Sequence):  # type: ignore[misc, unused-ignore]
    _fields = [  # noqa: RUF012 - asn1crypto completes the list
        ("content_description", core.UTF8String, {"optional": True}),
        ("content_type", cms.ContentType),
    ]


class _SetOfContentHints(core.SetOf):  # type: ignore[misc, unused-ignore]
    _child_spec = _ContentHints


cms.CMSAttributeType._map[_OID] = _NAME
cms.CMSAttribute._oid_specs[_NAME] = _SetOfContentHints


class _Hint(CMSAttributeProvider):
    attribute_type = _NAME

    def __init__(self, text: str) -> None:
        self._text = text

    async def build_attr_value(self, dry_run: bool = False) -> _ContentHints:
        return _ContentHints({"content_description": self._text, "content_type": "data"})


class Declaring(SignedAttributeProviderSpec):
    """The signed attributes of a detached signature: certificate, time, and what is declared.

    Parameters
    ----------
    signer : pyhanko signer
    time : datetime
    text : str
        "checked: I checked this calculation."
    """

    def __init__(self, signer: Signer, time: datetime.datetime, text: str) -> None:
        self._providers = [
            SigningCertificateV2Provider(signer.signing_cert),
            SigningTimeProvider(time),
            _Hint(text),
        ]

    def signed_attr_providers(
        self, data_digest: bytes, digest_algorithm: str
    ) -> Iterable[CMSAttributeProvider]:
        """The attributes, in order."""
        return self._providers


def declared(signed: cms.SignedData) -> str:
    """What a detached signature declares; "" where it declares nothing.

    Parameters
    ----------
    signed : asn1crypto's SignedData
    """
    for attribute in signed["signer_infos"][0]["signed_attrs"]:
        if attribute["type"].native == _NAME:
            return str(attribute["values"][0]["content_description"].native or "")
    return ""
