using CsCheck;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Files;

namespace StreamLogit.Pipeline.Tests.Files;

public sealed class LineCutterTests
{
    [Theory]
    [InlineData("", new string[0])]
    [InlineData("a", new[] { "a" })]
    [InlineData("a\n", new[] { "a" })]
    [InlineData("a\nb", new[] { "a", "b" })]
    [InlineData("a\r\nb\r\n", new[] { "a", "b" })]
    [InlineData("a\r", new[] { "a" })]
    [InlineData("a\rb\r\r\n", new[] { "a\rb\r" })]
    [InlineData("a\n\nb\n", new[] { "a", "", "b" })]
    [InlineData("\na", new[] { "", "a" })]
    [InlineData("a\n\n", new[] { "a" })]
    [InlineData("a\r\n\r\n", new[] { "a" })]
    [InlineData("a\n\n\n", new[] { "a", "" })]
    [InlineData("a\n ", new[] { "a", " " })]
    [InlineData("a\0b\n\xff\xfe\n", new[] { "a\0b", "\xff\xfe" })]
    public void Cut_Lines_GivesRecordsWithTheirNumbers(string text, string[] records)
    {
        for (int piece = 1; piece <= 4; piece++)
        {
            Assert.Equal(
                records.Select((record, i) => new TakenRecord(record, i + 1)),
                Cutting.Cut(new LineCutter(100), text, piece));
        }
    }

    [Theory]
    [InlineData("1234567890\nb", null)]
    [InlineData("1234567890\r\nb", null)]
    [InlineData("12345678901\nb", "11 bytes; at most 10 are allowed")]
    [InlineData("12345678901234567890123456789\nb", "29 bytes; at most 10 are allowed")]
    public void Cut_LongLine_IsARejectWithItsFirstBytes(string text, string? detail)
    {
        var reason = detail is null ? RejectReason.None : RejectReason.TooLong;
        for (int piece = 1; piece <= text.Length; piece++)
        {
            Assert.Equal(
                [new TakenRecord("1234567890", 1, reason, detail), new TakenRecord("b", 2)],
                Cutting.Cut(new LineCutter(10), text, piece));
        }
    }

    [Fact]
    public void Cut_LongLineAtTheEndOfTheFile_IsAReject()
    {
        for (int piece = 1; piece <= 30; piece++)
        {
            Assert.Equal(
                [new TakenRecord("a", 1), new TakenRecord("xxxxxxxxxx", 2, RejectReason.TooLong, "25 bytes; at most 10 are allowed")],
                Cutting.Cut(new LineCutter(10), "a\n" + new string('x', 25), piece));
        }
    }

    [Fact]
    public void Cut_AnyBytesInAnyPieces_GivesWhatSplittingTheWholeGives()
    {
        const int Maximum = 8;
        var text = Gen.Char["ab\n\n\r"].Array[0, 60].Select(characters => new string(characters));
        Gen.Select(text, Gen.Int[1, 20]).Sample((text, piece) =>
        {
            var lines = text.Split('\n').Select(line => line.EndsWith('\r') ? line[..^1] : line).ToList();
            // What stands behind the last line feed is a line only if there is something; and one empty line at the end is none.
            if (text.Length == 0 || text[^1] == '\n') lines.RemoveAt(lines.Count - 1);
            if (lines is [.., ""]) lines.RemoveAt(lines.Count - 1);

            var taken = Cutting.Cut(new LineCutter(Maximum), text, piece);

            Assert.Equal(lines.Select(line => line[..Math.Min(line.Length, Maximum)]), taken.Select(record => record.Text));
            Assert.Equal(lines.Select(line => line.Length > Maximum), taken.Select(record => record.Reason == RejectReason.TooLong));
            Assert.Equal(Enumerable.Range(1, lines.Count).Select(line => (long)line), taken.Select(record => record.Number));
        }, seed: "0000000000000");
    }
}
