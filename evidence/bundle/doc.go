// Package bundle writes, opens and checks evidence bundles, format 1: one zip file that holds a BagIt 1.0 bag (RFC 8493) and
// a seal over it. It knows files and hashes, and nothing of what the files say.
//
//	bagit.txt                   fixed text (RFC 8493, 2.1.1)
//	bag-info.txt                case, sample code, laboratory, program, Payload-Oxum: all of it follows from the statement
//	manifest-sha256.txt         SHA-256 and path of every file under data/, sorted by path; sha256sum -c reads it
//	tagmanifest-sha256.txt      the same for bag-info.txt, bagit.txt, manifest-sha256.txt and seal/statement.json
//	data/...                    the payload, sorted by path
//	seal/statement.json         the statement: canonical JSON (RFC 8785) that names all of the above by its hash
//	seal/signatures/NAME.p7s    detached CMS signatures over statement.json, sorted by name: see package cms
//
// The entries stand in this order. All of it but the signatures is a function of the header and the payload: two writes give
// the same bytes. Adding a signature changes nothing that is signed.
//
// # The statement
//
// This is a whole one, in lines for the eye (the file has none):
//
//	{"bag_info_sha256":"5b49e686216302bdb5e241d8285cdb9f928f3afe1fe59d5920834c28127c9894",
//	 "bagit_sha256":"1712ecfb074bf29c4188ad3421032509159a09739fd604f8fe57038b4ddefcc9",
//	 "bundle_id":"fb330702-b67a-83f5-bc87-32118c44fbc5","case":"C-0417","demonstration":false,
//	 "engine_name":"assaywrit","engine_version":"1.0.0","format":"assaywrit-statement/1","laboratory":"LAB-07",
//	 "manifest_sha256":"64ef0372426386bddc182eb8e3a95859be55feb90797125e4931fc10bfb18097",
//	 "merkle_root":"fb330702b67ac3f53c8732118c44fbc5b67ae2a08a0d10382ba10ebc850b12ac","payload_files":2,
//	 "payload_octets":15,"sample_code":"S-100200","signatories":[{"meaning":"authorised","person":"P-05",
//	 "position":"certifying scientist"}],"toolchain":"go1.26"}
//
// supersedes ({"reason", "root"}), evidence_sha256 and finding_sha256 are left out where they do not apply.
//
// merkle_root is the Merkle tree hash of RFC 6962, 2.1, over one leaf a payload file, sorted by path as bytes. A leaf is
// the canonical JSON of {"bytes": length, "path": "data/...", "sha256": lower-case hexadecimal}. With it, a copy that leaves
// files out can still be proved to belong to the whole. bundle_id is a UUID of version 8 (RFC 9562, 5.8): the first sixteen
// bytes of the root, with version and variant set.
//
// # The container
//
// Every entry has the time 1980-01-01 00:00:00 and the mode 0644. Payload that is compressed already (by its file name), or
// that deflating does not make smaller, is stored; everything else is deflated by one pinned library at one level.
// Opening treats the file as hostile and refuses, as a *RefusedError, what no honest writer makes; it accepts other times,
// modes and entry orders, so that a bundle that was unpacked and packed again by a general tool still opens.
package bundle
