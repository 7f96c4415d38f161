// SPDX-License-Identifier: Apache-2.0
/// @file
/// Schedules as CSV: forms that spreadsheets write, and what is said about rows that cannot be read.
#include <catch2/catch.hpp>

#include "tests/netlists/base.h"
#include "tests/netlists/folder.h"

namespace sunder::netlists {

namespace {

using models::Circuit;

constexpr std::string_view kAnnex =
    "[board.annex]\ncircuits_from = \"annex.csv\"\n"
    "[submain.S2]\nfrom = \"intake\"\nto = \"annex\"\ndevice = \"gG 63 A\"\ncable = \"multicore-xlpe-cu-5c 16 mm2\"\n"
    "length = \"20 m\"\n";

Reading read_with(const Folder& folder, std::string_view csv) {
  const std::string file = folder.write("annex.csv", csv);
  return read_network_text(std::string(kBase) + std::string(kAnnex), "base.toml", folder.path());
}

// The circuits that came from the schedule: those behind the two of the base.
std::vector<Circuit> circuits(const Reading& reading) {
  REQUIRE(reading.network.has_value());
  const auto& all = reading.network->circuits;
  REQUIRE(all.size() >= 2);
  return {all.begin() + 2, all.end()};
}

constexpr const char* kHeading = "way,use,phases,device,cable,length [m],load [A],pf\n";
constexpr const char* kRow = "C1,fixed,L1,B 16 A 6 kA,flat-pvc-cu 2.5/1.5 mm2,18,10,0.9\n";

}  // namespace

TEST_CASE("A schedule's rows are circuits, and headings give the units of bare numbers", "[netlists]") {
  const Folder folder("sunder_csv_plain");
  const Reading reading =
      read_with(folder, std::string(kHeading) + kRow + "C2,,L2 ,B 6 A,flat-pvc-cu 1.5/1 mm2,2500 cm,,\n");
  CHECK(said(reading).empty());
  const std::vector<Circuit> read = circuits(reading);
  REQUIRE(read.size() == 2);
  CHECK(read[0].name == "C1");
  CHECK(read[0].use == models::Use::fixed);
  CHECK(read[0].length.value == 18.0);
  CHECK(read[0].load.value == 10.0);
  CHECK(read[0].pf.value == 0.9);
  CHECK(read[0].device.In == 16.0);
  CHECK(read[0].cable.protective.size() == 1);
  // a cell may carry its own unit, and an empty one is absent
  CHECK(read[1].length.value == Approx(25.0).epsilon(1e-12));
  CHECK_FALSE(read[1].load.given);
  CHECK_FALSE(read[1].pf.given);
  CHECK(read[1].use == models::Use::unknown);
}

TEST_CASE("Values of a schedule know the row and the character they came from", "[netlists]") {
  const Folder folder("sunder_csv_origin");
  const Reading reading = read_with(folder,
                                    "way,serves,phases,device,cable,length [m]\r\n"
                                    "C1,\"caf\xC3\xA9, large\",L1,B 16 A,\"flat-pvc-cu 2.5/1.5 mm2\",18\r\n");
  const Circuit circuit = circuits(reading).at(0);
  CHECK(circuit.serves == "caf\xC3\xA9, large");
  CHECK(circuit.length.at.line == 2);
  CHECK(circuit.length.at.column == 54);
  CHECK(circuit.cable.at.column == 29);
  CHECK(reading.network->files.at(circuit.length.at.file) == folder.path("annex.csv"));
}

TEST_CASE("Byte order mark, CRLF, semicolons and tabs of spreadsheets are recognised", "[netlists]") {
  const Folder folder("sunder_csv_forms");
  const std::string plain = std::string(kHeading) + kRow;
  auto with = [&](char separator, std::string_view line_end, std::string_view start) {
    std::string text(start);
    for (const char c : plain) {
      if (c == ',')
        text += separator;
      else if (c == '\n')
        text += line_end;
      else
        text += c;
    }
    return text;
  };
  for (const char separator : {',', ';', '\t'}) {
    for (const std::string_view line_end : {"\n", "\r\n"}) {
      for (const std::string_view start : {"", "\xEF\xBB\xBF"}) {
        CAPTURE(separator, line_end, start);
        const Reading reading = read_with(folder, with(separator, line_end, start));
        CHECK(said(reading).empty());
        const std::vector<Circuit> read = circuits(reading);
        REQUIRE(read.size() == 1);
        CHECK(read[0].length.value == 18.0);
        CHECK(read[0].length.at.column == 49);
      }
    }
  }
}

TEST_CASE("Quoted cells may hold separators, doubled quotes and line ends", "[netlists]") {
  const Folder folder("sunder_csv_quotes");
  const Reading reading = read_with(folder,
                                    "way,serves,phases,device,cable,length\n"
                                    "C1,\"a \"\"big\"\" saw,\nold\",L1,B 16 A,flat-pvc-cu 2.5/1.5 mm2,18 m\n\n,,,,,\n"
                                    "C2, plain ,L2,B 16 A,flat-pvc-cu 2.5/1.5 mm2,19 m");
  CHECK(said(reading).empty());
  const std::vector<Circuit> read = circuits(reading);
  REQUIRE(read.size() == 2);
  CHECK(read[0].serves == "a \"big\" saw,\nold");
  CHECK(read[1].serves == "plain");
  CHECK(read[1].length.at.line == 6);
}

TEST_CASE("Rings, spurs and flags of a schedule are read from cells", "[netlists]") {
  const Folder folder("sunder_csv_ring");
  const Reading reading = read_with(folder,
                                    "way,phases,device,cable,length [m],ring,spurs,motor\n"
                                    "C1,L1,B 32 A,flat-pvc-cu 2.5/1.5 mm2,54,TRUE,20 m:4 m; 31 m:3 m,no\n");
  CHECK(said(reading).empty());
  const Circuit circuit = circuits(reading).at(0);
  CHECK(circuit.ring);
  CHECK_FALSE(circuit.motor);
  REQUIRE(circuit.spurs.size() == 2);
  CHECK(circuit.spurs[0].at == 20.0);
  CHECK(circuit.spurs[0].length == 4.0);
  CHECK(circuit.spurs[1].at == 31.0);
  CHECK(circuit.spurs[1].length == 3.0);
  CHECK(circuit.spurs[1].origin.line == 2);
}

TEST_CASE("What a schedule has wrong is told with its row and column, word for word", "[netlists]") {
  struct Case {
    std::string csv;
    std::string_view said;
  };
  const std::string heading = kHeading;
  const std::vector<Case> cases = {
      {heading + "C1;fixed\n",
       R"(2:1+1 error: circuit 'annex/C1;fixed' has no 'phases', which is obligatory | phases: Its live conductors: "L2" has a neutral, "L1 L2" and "L1 L2 L3" have none.
2:1+1 error: circuit 'annex/C1;fixed' has no 'device', which is obligatory | device: The device at its start.
2:1+1 error: circuit 'annex/C1;fixed' has no 'cable', which is obligatory | cable: Construction and size.
2:1+1 error: circuit 'annex/C1;fixed' has no 'length', which is obligatory | length: Its length; of a ring the whole loop from end to end.
)"},
      {heading + "C1,fixed,L1,B 16 A,flat-pvc-cu 2.5/1.5 mm2,\"18,5\",10,0.9\n",
       "2:45+4 error: '18,5' in column 'length' has a decimal comma | write 18.5\n"},
      {heading + "C1,fixed,L1,B 16 A,flat-pvc-cu 2.5/1.5 mm2,18,5,10,0.9\n",
       "2:52+3 error: this row has more cells than the heading's 8 | a text that holds the separator stands in quotes; "
       "decimals take a point\n"},
      {heading + ",fixed,L1,B 16 A,flat-pvc-cu 2.5/1.5 mm2,18,10,0.9\n",
       "2:1+1 error: this row has no way, the name of its circuit\n"},
      {heading + "C1,fixed,L1,B 16 A,flat-pvc-cu 2.5/1.5 mm2,-18,10,0.9\n",
       "2:44+3 error: length of circuit 'annex/C1' is -18 m; it must be above 0 m\n"},
      {heading + "C1,fixed,L1,B 16 A,flat-pvc-cu 2.5/1.5 mm2,18 kg,10,0.9\n",
       "2:44+5 error: length of circuit "
       "'annex/C1': unknown unit 'kg'; a length is written in m, km, cm, mm\n"},
      {heading + kRow + kRow, "3:1+2 error: circuit 'annex/C1' is declared twice\n2:1+1 note: first declared here\n"},
      {"way,lenght [m]\n", "1:5+10 error: unknown column 'lenght' | did you mean 'length'?\n"},
      {"way,use,use\n", "1:9+3 error: column 'use' stands twice\n"},
      {"way,length [A]\n", "1:5+10 error: unit 'A' does not fit column 'length' | units that fit: m, km, cm, mm\n"},
      {"way,use [m]\n", "1:5+7 error: column 'use' has no unit\n"},
      {"use,phases\n",
       "1:1+1 error: the schedule has no column 'way', which names its circuits | columns: way and the "
       "keys of a circuit, such as \"length [m]\"\n"},
      {"way,,use\nC1,x,\n", "2:4+1 error: column 2 has no heading\n"},
      {"way,serves\n\"C1,open\n", "2:1+1 error: a quoted cell is not closed\n"},
      {"way,serves\n\"C1\" x,y\n", "2:5+1 error: text stands behind the quotes of a cell\n"},
      {"way,spurs\nC1,20 m\n",
       "2:4+4 error: spur '20 m' of circuit 'annex/C1' is not understood | form: at:length, such as "
       "\"20 m:4 m; 31 m:3 m\"\n"},
      {"", "0:0+1 error: the schedule is empty\n"},
      {std::string("way\nC1\0\n", 8), "0:0+1 error: the schedule is not a text: byte 7 is zero\n"},
      {"way\nC\xFF\n", "2:2+1 error: the schedule is not UTF-8: byte 0xFF | save it with the encoding UTF-8\n"},
  };
  const Folder folder("sunder_csv_wrong");
  for (const Case& one : cases) {
    CAPTURE(one.csv);
    const Reading reading = read_with(folder, one.csv);
    CHECK_FALSE(reading.network.has_value());
    for (const Diagnostic& diagnostic : reading.diagnostics) CHECK(diagnostic.file == folder.path("annex.csv"));
    CHECK_THAT(said(reading), Catch::Matchers::Contains(std::string(one.said)));
  }
}

TEST_CASE("A schedule file that is missing, a folder or too large is refused where it is named", "[netlists]") {
  const Folder folder("sunder_csv_files");
  const std::string text = std::string(kBase) + std::string(kAnnex);
  CHECK(said(read_network_text(text, "base.toml", folder.path())) ==
        "29:18+9 error: schedule file '" + folder.path("annex.csv") + "' does not exist\n");
  std::filesystem::create_directory(folder.path("annex.csv"));
  CHECK(said(read_network_text(text, "base.toml", folder.path())) ==
        "29:18+9 error: schedule file '" + folder.path("annex.csv") + "' is a folder\n");
  std::filesystem::remove(folder.path("annex.csv"));
  const std::string large = folder.write("annex.csv", "way\n");
  std::filesystem::resize_file(large, kLargestFile + 1);  // holes, so that no disk is filled
  CHECK(said(read_network_text(text, "base.toml", folder.path())) ==
        "29:18+9 error: schedule file '" + large + "' has 67108865 bytes; at most 67108864 are read\n");
}

TEST_CASE("A circuit that stands in netlist and schedule is told with both places", "[netlists]") {
  const Folder folder("sunder_csv_both");
  const std::string file =
      folder.write("shop.csv", std::string(kHeading) + "W1,fixed,L1,B 16 A,flat-pvc-cu 2.5/1.5 mm2,18,10,0.9\n");
  const std::string text = spoiled(15, "[board.shop]\ncircuits_from = \"shop.csv\"");
  const Reading reading = read_network_text(text, "base.toml", folder.path());
  REQUIRE(reading.diagnostics.size() == 2);
  CHECK(format_diagnostic(reading.diagnostics[0]) == file +
                                                         ":2:1: error: circuit 'shop/W1' is declared twice\n"
                                                         " 2 | W1,fixed,L1,B 16 A,flat-pvc-cu 2.5/1.5 mm2,18,10,0.9\n"
                                                         "   | ^~\n");
  CHECK(format_diagnostic(reading.diagnostics[1]) == "base.toml:27:1: note: first declared here\n");
}

}  // namespace sunder::netlists
