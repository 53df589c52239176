// Parts of tools/common: strict numbers, quoting, tables, exit codes.
#include <gtest/gtest.h>

#include <cstdio>
#include <filesystem>
#include <limits>
#include <sstream>

#include "common/command_line.hpp"
#include "common/csv_writer.hpp"
#include "common/exit_codes.hpp"
#include "common/guarded_main.hpp"
#include "common/parse.hpp"
#include "common/preparation_flags.hpp"
#include "tambour/error.hpp"
#include "tambour/files.hpp"

namespace tambour::tools {
namespace {

TEST(Parse, NumbersAreReadWholeOrNotAtAll) {
  EXPECT_EQ(parse_number("x", "-3.5e1"), -35);
  EXPECT_EQ(parse_number("x", "+2"), 2);
  for (const char* bad : {"", " 1", "1 ", "1,5", "1e", "nan", "inf", "0x10", "--3", "1e999"})
    EXPECT_THROW(parse_number("x", bad), Error) << bad;
  EXPECT_EQ(parse_integer("n", "-07"), -7);
  for (const char* bad : {"", "1.0", "1e3", "9223372036854775808"}) EXPECT_THROW(parse_integer("n", bad), Error) << bad;
}

TEST(Parse, PairsAndRanges) {
  EXPECT_EQ(parse_pair("c", "-3,4.5"), std::make_pair(-3.0, 4.5));
  EXPECT_EQ(parse_pair("c", " 1 , 2 "), std::make_pair(1.0, 2.0));
  for (const char* bad : {"3", "3;4", "3,4,5", "3,", "nan,1"}) EXPECT_THROW(parse_pair("c", bad), Error) << bad;
  EXPECT_EQ(parse_range("f", "2:24"), std::make_pair(2, 24));
  EXPECT_EQ(parse_range("f", "7"), std::make_pair(7, 7));
  for (const char* bad : {"", "2:", ":3", "2:3:4", "2-3", "9999999999:3"})
    EXPECT_THROW(parse_range("f", bad), Error) << bad;
}

TEST(Parse, ErrorsNameTheFlagTheValueAndWhatIsAllowed) {
  try {
    parse_number("--snr", "loud");
    FAIL();
  } catch (const Error& error) {
    EXPECT_EQ(error.code(), ErrorCode::invalid_argument);
    EXPECT_STREQ(error.what(), "--snr is 'loud'; allowed is a finite number");
  }
}

/// What a shell makes of the quoted word.
std::string through_shell(const std::string& quoted) {
  std::FILE* pipe = popen(("printf %s " + quoted).c_str(), "r");
  std::string text;
  for (int c = std::fgetc(pipe); c != EOF; c = std::fgetc(pipe)) text += static_cast<char>(c);
  pclose(pipe);
  return text;
}

TEST(ShellQuote, AShellReadsBackTheSameWord) {
  for (const std::string word : {"a.mrc", "two words", "it's", "$HOME", "a;b|c&d", "*?[x]", "\"q\"", "back\\slash",
                                 "-3,4", "~", "#x", "caf\xc3\xa9", "a\nb"})
    EXPECT_EQ(through_shell(shell_quote(word)), word);
  EXPECT_EQ(shell_quote(""), "''");
  EXPECT_EQ(shell_quote("h5.h5::/a/b"), "h5.h5::/a/b");
}

TEST(Cells, NumbersKeepTenDigitsAndNothingIsEmpty) {
  EXPECT_EQ(cell(1.0 / 3), "0.3333333333");
  EXPECT_EQ(cell(12.0), "12");
  EXPECT_EQ(cell(-1.5e-30), "-1.5e-30");
  EXPECT_EQ(cell(std::numeric_limits<double>::quiet_NaN()), "");
  EXPECT_EQ(cell(std::numeric_limits<double>::infinity()), "");
  EXPECT_EQ(cell(std::optional<double>()), "");
}

TEST(Cells, WhatIsWrittenIsReadBackByTheTableReader) {
  const auto path = std::filesystem::path(::testing::TempDir()) / "cells.csv";
  const std::vector<std::string> texts{"plain", "a, b", "say \"x\"", "# no comment", "", " spaces ", "x=1;y=2"};
  {
    CsvWriter table(path.string(), true);
    table.comment("a comment\nthat would break the table");
    table.row({"text", "number"});
    for (const auto& text : texts) table.row({text_cell(text), cell(0.1)});
    table.commit();
  }
  const Table table = read_table(path.string());
  ASSERT_EQ(table.rows.size(), texts.size());
  for (std::size_t i = 0; i < texts.size(); ++i) {
    EXPECT_EQ(table.rows[i][0], texts[i]);
    EXPECT_EQ(table.number(i, 1), 0.1);
  }
  std::filesystem::remove(path);
}

int throws(ErrorCode code) { throw Error(code, "something is wrong"); }

TEST(GuardedRun, EveryKindOfErrorHasItsExitCodeAndOneSentence) {
  const auto code_of = [](tools::Run run) {
    std::ostringstream out, err;
    const int code = guarded_run("tambour-test", run, {}, out, err);
    EXPECT_EQ(out.str(), "");
    EXPECT_EQ(err.str().rfind("tambour-test: ", 0), 0U);
    return code;
  };
  using Stream = std::ostream;
  EXPECT_EQ(code_of([](const Arguments&, Stream&, Stream&) { return throws(ErrorCode::invalid_argument); }),
            exit_usage);
  EXPECT_EQ(code_of([](const Arguments&, Stream&, Stream&) { return throws(ErrorCode::bad_input); }), exit_files);
  EXPECT_EQ(code_of([](const Arguments&, Stream&, Stream&) { return throws(ErrorCode::cannot_write); }), exit_files);
  EXPECT_EQ(code_of([](const Arguments&, Stream&, Stream&) { return throws(ErrorCode::internal); }), exit_fault);
  EXPECT_EQ(code_of([](const Arguments&, Stream&, Stream&) -> int { throw std::runtime_error("oops"); }), exit_fault);
  EXPECT_EQ(code_of([](const Arguments&, Stream&, Stream&) -> int { throw std::bad_alloc(); }), exit_fault);
}

TEST(GuardedRun, AnUnwritableStandardOutputSpoilsTheExitCode) {
  const tools::Run writes = [](const Arguments&, std::ostream& out, std::ostream&) {
    out << "result\n";
    return 0;
  };
  std::ostringstream out, err;
  EXPECT_EQ(guarded_run("tambour-test", writes, {}, out, err), exit_done);
  out.setstate(std::ios::badbit);
  EXPECT_EQ(guarded_run("tambour-test", writes, {}, out, err), exit_files);
}

TEST(CommandLine, TakesNegativeValuesAndListsEveryOption) {
  CommandLine line("tambour-test", "Tests.");
  double number = 1;
  std::string centre;
  std::string kind = "a";
  bool flag = false;
  line.add_number("--number", number, "A number");
  line.add_text("--centre", centre, "X,Y", "A place");
  line.add_choice("--kind", kind, {"a", "b"}, "A kind");
  line.add_flag("--flag", flag, "A flag");
  std::ostringstream out;
  ASSERT_TRUE(line.parse({"--number", "-2.5", "--centre", "-3,4", "-o", "x y"}, out));
  EXPECT_EQ(number, -2.5);
  EXPECT_EQ(centre, "-3,4");
  EXPECT_TRUE(line.given("--number"));
  EXPECT_FALSE(line.given("--kind"));
  EXPECT_EQ(line.command(), "tambour-test --number -2.5 --centre -3,4 -o 'x y'");
  std::vector<std::pair<std::string, std::string>> told;
  for (const auto& option : line.options())
    if (option.first != "--threads") told.push_back(option);
  const std::vector<std::pair<std::string, std::string>> expected{
      {"--out", "x y"},     {"--force", "false"}, {"--quiet", "false"}, {"--json", "false"},
      {"--number", "-2.5"}, {"--centre", "-3,4"}, {"--kind", "a"},      {"--flag", "false"}};
  EXPECT_EQ(told, expected);
}

TEST(PreparationFlags, ADefaultBackgroundGivesWayWhereTheFrameHasNoRoomForIt) {
  for (const bool asked : {false, true}) {
    CommandLine line("tambour-test", "Tests.");
    PreparationFlags flags;
    flags.add_to(line, Background::quadratic);
    std::ostringstream out, err;
    ASSERT_TRUE(line.parse(asked ? Arguments{"-o", "x", "--background", "quadratic"} : Arguments{"-o", "x"}, out));
    Session session(line, out, err);
    EXPECT_EQ(flags.resolve(64, 64, 24, session).background, Background::quadratic);
    EXPECT_EQ(err.str(), "");
    // 12 pixels of an 8 x 8 frame lie outside a disk of 4 px, within 5.2 px; a background needs 20.
    EXPECT_EQ(flags.resolve(8, 8, 4, session).background, asked ? Background::quadratic : Background::none);
    EXPECT_EQ(err.str().find("too few pixels outside") != std::string::npos, !asked);
    EXPECT_EQ(session.remarks().size(), asked ? 0U : 1U);
  }
}

TEST(CommandLine, RefusesWhatIsNotAllowed) {
  std::ostringstream out;
  for (const Arguments& bad : {Arguments{}, Arguments{"-o"}, Arguments{"-o", "x", "--kind", "c"},
                               Arguments{"-o", "x", "--unknown"}, Arguments{"-o", "x", "stray"}}) {
    CommandLine line("tambour-test", "Tests.");
    std::string kind = "a";
    line.add_choice("--kind", kind, {"a", "b"}, "A kind");
    EXPECT_THROW(line.parse(bad, out), Error);
  }
  EXPECT_EQ(out.str(), "");
}

}  // namespace
}  // namespace tambour::tools
