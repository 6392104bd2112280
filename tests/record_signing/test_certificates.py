"""Certificates: each fault in a sentence of its own; time stamps; tokens; the identity for trying out."""

from __future__ import annotations

import datetime
import http.server
import os
import shutil
import subprocess
import threading
from pathlib import Path

import pytest
import signing_packs as packs
from asn1crypto import keys as asn1_keys
from asn1crypto import tsp
from asn1crypto import x509 as asn1_x509
from cryptography import x509
from cryptography.hazmat.primitives import hashes, serialization
from cryptography.hazmat.primitives.asymmetric import ec, rsa
from cryptography.hazmat.primitives.serialization import pkcs12
from cryptography.x509.oid import ExtendedKeyUsageOID, NameOID
from pyhanko.sign.timestamps import DummyTimeStamper

from calcpack.job.errors import CalcpackError
from calcpack.record import sign as sign_module
from calcpack.record import verify as verify_module
from calcpack.record.identity import load_identity, new_identity, write_identity
from calcpack.record.numbers import NumbersResult
from calcpack.record.sign import sign_file
from calcpack.record.signatures import Trust
from calcpack.record.verify import verify_file

LATER = packs.NOW + 400 * packs.DAY


@pytest.fixture(autouse=True)
def _quick(monkeypatch, tmp_path_factory):
    monkeypatch.setenv("PYTEST_TMP", str(tmp_path_factory.getbasetemp()))
    for module in (sign_module, verify_module):
        monkeypatch.setattr(module, "audited", lambda _path: NumbersResult(True, "the audit passes"))


@pytest.fixture
def pack(tmp_path):
    return packs.out_folder(tmp_path / "out", level="self") / "pack.pdf"


def refusal(work, *words, **more):
    with pytest.raises(CalcpackError) as caught:
        work(*words, **more)
    return str(caught.value)


def doubts(pack, trust):
    return [finding.says for finding in verify_file(pack, trust).findings if finding.about == "trust"]


def certificate(name, *, issuer=None, usage=None, purposes=(), authority=False, key=None):
    """A certificate with its key, issued by itself or by another (certificate, key)."""
    key = key or ec.generate_private_key(ec.SECP256R1())
    subject = x509.Name([x509.NameAttribute(NameOID.COMMON_NAME, name)])
    uses = dict.fromkeys(
        ("digital_signature", "content_commitment", "key_encipherment", "data_encipherment", "key_agreement",
         "key_cert_sign", "crl_sign", "encipher_only", "decipher_only"), False,
    )  # fmt: skip
    uses |= dict.fromkeys(usage or ("digital_signature", "content_commitment"), True)
    builder = (
        x509.CertificateBuilder()
        .subject_name(subject)
        .issuer_name(issuer[0].subject if issuer else subject)
        .public_key(key.public_key())
        .serial_number(x509.random_serial_number())
        .not_valid_before(packs.NOW - packs.DAY)
        .not_valid_after(packs.NOW + 3000 * packs.DAY)
        .add_extension(x509.BasicConstraints(ca=authority, path_length=None), critical=True)
        .add_extension(x509.KeyUsage(**uses), critical=True)
    )
    if purposes:
        builder = builder.add_extension(x509.ExtendedKeyUsage(purposes), critical=True)
    return builder.sign(issuer[1] if issuer else key, hashes.SHA256()), key


def identity(made, tmp_path, chain=()):
    stored = pkcs12.serialize_key_and_certificates(
        b"id", made[1], made[0], [each[0] for each in chain] or None, serialization.NoEncryption()
    )
    path = tmp_path / "made.p12"
    path.write_bytes(stored)
    return load_identity(str(path), lambda _what: "")


def as_asn1(made):
    return asn1_x509.Certificate.load(made[0].public_bytes(serialization.Encoding.DER))


# ------------------------------------------------------------------ faults of a certificate


def test_an_expired_certificate(pack):
    old = packs.person("Old Hand", begins=-30, days=10)
    said = refusal(sign_file, pack, packs.signing("prepared", old))
    assert said == "the certificate of Old Hand expired on 11 Nov 2026"
    sign_file(pack, packs.signing("prepared", old, now=packs.NOW - 25 * packs.DAY))
    (doubt,) = doubts(pack, packs.trust(old))
    assert doubt == (
        "the certificate of Old Hand expired on 11 Nov 2026, and no trusted time stamp proves"
        " that the signature was made before"
    )
    assert not verify_file(pack, packs.trust(old)).passes
    assert doubts(pack, packs.trust(old, now=packs.NOW - 24 * packs.DAY))[0].startswith("vouched for")


def test_a_certificate_that_is_not_valid_yet(pack):
    early = packs.person("Early Bird", begins=5)
    said = refusal(sign_file, pack, packs.signing("prepared", early))
    assert said == "the certificate of Early Bird is not valid yet: it begins on 6 Dec 2026"
    sign_file(pack, packs.signing("prepared", early, now=packs.NOW + 6 * packs.DAY))
    assert doubts(pack, packs.trust(early)) == [
        "the certificate of Early Bird is not valid yet: it begins on 6 Dec 2026"
    ]
    assert not verify_file(pack, packs.trust(early)).passes


@pytest.mark.parametrize(
    ("usage", "purposes", "words"),
    [
        (("key_encipherment",), (), "encrypting keys"),
        (("key_cert_sign", "crl_sign"), (), "revocation lists, issuing certificates"),
        (None, (ExtendedKeyUsageOID.SERVER_AUTH,), "naming a server"),
    ],
)
def test_a_certificate_made_for_something_else(pack, tmp_path, usage, purposes, words):
    other = identity(certificate("Web Server", usage=usage, purposes=purposes), tmp_path)
    said = refusal(sign_file, pack, packs.signing("prepared", other))
    assert said.startswith(
        "the certificate of Web Server is not made for signing documents: it was issued for "
    )
    assert set(words.split(", ")) == set(said.rpartition("issued for ")[2].split(", "))


def test_the_certificate_of_another_role(tmp_path):
    pack = packs.out_folder(tmp_path / "named", prepared="M. Ravn") / "pack.pdf"
    said = refusal(sign_file, pack, packs.signing("prepared", packs.person("Ivo Okoro")))
    assert "the job names M. Ravn as preparer, the certificate is Ivo Okoro's" in said


def test_a_certificate_nobody_vouches_for(pack):
    who, other = packs.person("Maria Ravn"), packs.person("Ivo Okoro")
    sign_file(pack, packs.signing("prepared", who))
    assert doubts(pack, packs.trust(other)) == [
        "none of the trusted certificates vouches for Maria Ravn (issued by Maria Ravn)"
    ]
    assert doubts(pack, packs.trust()) == [
        "no trusted certificate was given, so it is not established that this is Maria Ravn"
    ]


def test_a_certificate_an_authority_vouches_for(pack, tmp_path):
    root = certificate("Chamber of Engineers", authority=True, usage=("key_cert_sign",))
    middle = certificate("Chamber, persons", issuer=root, authority=True, usage=("key_cert_sign",))
    who = identity(certificate("Maria Ravn", issuer=middle), tmp_path, chain=(middle,))
    sign_file(pack, packs.signing("prepared", who))
    report = verify_file(pack, Trust((as_asn1(root),), packs.NOW))
    assert report.passes, report.as_text()


# ------------------------------------------------------------------ the identity for trying out


def test_a_test_identity_says_what_it_is(tmp_path, pack):
    stored, pem = new_identity("Maria Ravn", "pw", packs.NOW, licence="SE 1184")
    made = x509.load_pem_x509_certificate(pem)
    (unit,) = made.subject.get_attributes_for_oid(NameOID.ORGANIZATIONAL_UNIT_NAME)
    assert unit.value == "calcpack test identity, not issued by any authority"
    assert made.issuer == made.subject
    path = tmp_path / "id.p12"
    path.write_bytes(stored)
    who = load_identity(str(path), lambda _what: "pw")
    assert (who.certificate.test, who.certificate.licence) == (True, "SE 1184")
    sign_file(pack, packs.signing("prepared", who))
    report = verify_file(pack, packs.trust(who))
    assert "Maria Ravn signed with a test identity, no legal force" in report.as_text()


def test_what_an_identity_is_refused_for(tmp_path):
    assert "needs a name" in refusal(new_identity, " ", "pw", packs.NOW)
    assert "longer than the 64" in refusal(new_identity, "x" * 65, "pw", packs.NOW)
    assert "none was given" in refusal(new_identity, "A", "", packs.NOW)
    path = tmp_path / "id.p12"
    write_identity(path, "A", "pw", packs.NOW)
    assert oct(path.stat().st_mode & 0o777) == "0o600"
    assert "is there already" in refusal(write_identity, path, "B", "pw", packs.NOW)
    assert "does not open" in refusal(load_identity, str(path), lambda _what: "other")
    assert "is no PKCS#12 file" in refusal(load_identity, str(path.with_suffix(".pem")), lambda _what: "pw")
    assert "cannot be read" in refusal(load_identity, str(tmp_path / "none.p12"), lambda _what: "pw")
    assert "which key of which module" in refusal(load_identity, "pkcs11:token=a", lambda _what: "1")


# ------------------------------------------------------------------ time stamps


@pytest.fixture
def authority():
    """A time-stamping authority on this machine: its address and its certificate."""
    made = certificate(
        "Clock Tower",
        purposes=(ExtendedKeyUsageOID.TIME_STAMPING,),
        key=rsa.generate_private_key(public_exponent=65537, key_size=2048),
    )
    key = asn1_keys.PrivateKeyInfo.load(
        made[1].private_bytes(
            serialization.Encoding.DER, serialization.PrivateFormat.PKCS8, serialization.NoEncryption()
        )
    )
    stamper = DummyTimeStamper(as_asn1(made), key, fixed_dt=packs.NOW)

    class Answer(http.server.BaseHTTPRequestHandler):
        def do_POST(self):
            asked = tsp.TimeStampReq.load(self.rfile.read(int(self.headers["Content-Length"])))
            answer = stamper.request_tsa_response(asked).dump()
            self.send_response(200)
            self.send_header("Content-Type", "application/timestamp-reply")
            self.send_header("Content-Length", str(len(answer)))
            self.end_headers()
            self.wfile.write(answer)

        def log_message(self, *_words):
            pass

    server = http.server.ThreadingHTTPServer(("127.0.0.1", 0), Answer)
    thread = threading.Thread(target=server.serve_forever)
    thread.start()
    yield f"http://127.0.0.1:{server.server_port}/", as_asn1(made)
    server.shutdown()
    thread.join()
    server.server_close()


def test_a_time_stamp_outlives_the_certificate(pack, authority):
    who = packs.person("Maria Ravn")
    sign_file(pack, packs.signing("prepared", who, timestamp_url=authority[0]))
    roots = (who.signer.signing_cert, authority[1])
    report = verify_file(pack, Trust(roots, LATER))
    assert report.passes, report.as_text()
    assert report.signatures[0].stamped == packs.NOW
    assert "time-stamped 1 Dec 2026 09:05 UTC" in report.as_text()
    distrusted = verify_file(pack, Trust(roots[:1], LATER))
    assert not distrusted.passes
    assert distrusted.signatures[0].stamped is None


def test_long_term_data_under_a_time_stamp(pack, authority, monkeypatch):
    who = packs.person("Maria Ravn", begins=-3)
    now = datetime.datetime.now(datetime.UTC).replace(microsecond=0)
    real = packs.person("Present Person", begins=(now - packs.NOW).days - 3)
    assert "give --timestamp-url and --trust" in refusal(
        sign_file, pack, packs.signing("prepared", who, long_term=True)
    )
    trusted = (real.signer.signing_cert, authority[1])
    signing = packs.signing(
        "prepared", real, now=now, timestamp_url=authority[0], long_term=True, trusted=trusted
    )
    sign_file(pack, signing)
    data = pack.read_bytes()
    assert b"/DSS" in data
    assert b"/DocTimeStamp" in data
    report = verify_file(pack, Trust(trusted, now))
    assert report.passes, report.as_text()
    place = data.rindex(b"/DSS")
    pack.write_bytes(data[:place] + b"/DSX" + data[place + 4 :])
    assert not verify_file(pack, Trust(trusted, now)).passes


def test_an_authority_that_does_not_answer(pack):
    before = pack.read_bytes()
    signing = packs.signing("prepared", packs.person("Maria Ravn"), timestamp_url="http://127.0.0.1:9/")
    assert "no time stamp" in refusal(sign_file, pack, signing)
    assert pack.read_bytes() == before


# ------------------------------------------------------------------ tokens

MODULES = ("/usr/lib/softhsm/libsofthsm2.so", "/usr/lib/x86_64-linux-gnu/softhsm/libsofthsm2.so")
MODULE = next((module for module in MODULES if Path(module).is_file()), None)


def test_a_token(pack, tmp_path, monkeypatch):
    pkcs11 = pytest.importorskip(
        "pkcs11", reason="python-pkcs11 is not installed: pip install 'calcpack[token]'"
    )
    if MODULE is None or shutil.which("softhsm2-util") is None:
        pytest.skip("SoftHSM, a token in software, is not installed")
    (tmp_path / "tokens").mkdir()
    (tmp_path / "softhsm2.conf").write_text(f"directories.tokendir = {tmp_path / 'tokens'}\n")
    monkeypatch.setenv("SOFTHSM2_CONF", str(tmp_path / "softhsm2.conf"))
    subprocess.run(
        ["softhsm2-util", "--init-token", "--free", "--label", "card", "--so-pin", "0000", "--pin", "1234"],
        check=True, capture_output=True, env=dict(os.environ),
    )  # fmt: skip
    made = certificate("Maria Ravn")
    key = made[1].private_bytes(
        serialization.Encoding.PEM, serialization.PrivateFormat.PKCS8, serialization.NoEncryption()
    )
    (tmp_path / "key.pem").write_bytes(key)
    subprocess.run(
        ["softhsm2-util", "--import", tmp_path / "key.pem", "--token", "card", "--label", "sign",
         "--id", "01", "--pin", "1234"],
        check=True, capture_output=True, env=dict(os.environ),
    )  # fmt: skip
    der = made[0].public_bytes(serialization.Encoding.DER)
    with pkcs11.lib(MODULE).get_token(token_label="card").open(rw=True, user_pin="1234") as session:
        session.create_object(
            {
                pkcs11.Attribute.CLASS: pkcs11.ObjectClass.CERTIFICATE,
                pkcs11.Attribute.CERTIFICATE_TYPE: pkcs11.CertificateType.X_509,
                pkcs11.Attribute.TOKEN: True,
                pkcs11.Attribute.LABEL: "sign",
                pkcs11.Attribute.ID: b"\x01",
                pkcs11.Attribute.SUBJECT: made[0].subject.public_bytes(),
                pkcs11.Attribute.VALUE: der,
            }
        )
    uri = f"pkcs11:token=card;object=sign?module-path={MODULE}"
    assert "the token 'card' cannot be used" in refusal(load_identity, uri, lambda _what: "9999")
    who = load_identity(uri, lambda _what: "1234")
    sign_file(pack, packs.signing("prepared", who))
    assert verify_file(pack, Trust((as_asn1(made),), packs.NOW)).passes


def test_an_rsa_key(pack, tmp_path):
    made = certificate("Maria Ravn", key=rsa.generate_private_key(public_exponent=65537, key_size=2048))
    who = identity(made, tmp_path)
    sign_file(pack, packs.signing("prepared", who))
    assert verify_file(pack, packs.trust(who)).passes
    data = pack.read_bytes()
    last = data.rindex(b"/Contents <") + 11
    for place in range(last, last + 120):
        digit = b"0" if data[place : place + 1] != b"0" else b"1"
        pack.write_bytes(data[:place] + digit + data[place + 1 :])
        assert not verify_file(pack, packs.trust(who)).passes, place
