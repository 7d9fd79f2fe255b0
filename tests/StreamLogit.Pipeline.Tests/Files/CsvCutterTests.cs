using System.Globalization;
using System.Text;
using System.Text.Json;
using CsCheck;
using nietras.SeparatedValues;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Files;

namespace StreamLogit.Pipeline.Tests.Files;

public sealed class CsvCutterTests
{
    private static List<TakenRecord> Cut(string text, int maximumBytes = 1000, int piece = int.MaxValue) =>
        Cutting.Cut(new CsvCutter("quay.csv", maximumBytes), text, piece);

    [Theory]
    [InlineData("5", "5")]
    [InlineData("-0.5e-3", "-0.5e-3")]
    [InlineData("1E+400", "1E+400")]
    [InlineData("007", "\"007\"")]
    [InlineData("+5", "\"+5\"")]
    [InlineData(".5", "\".5\"")]
    [InlineData("5.", "\"5.\"")]
    [InlineData("-", "\"-\"")]
    [InlineData("5e", "\"5e\"")]
    [InlineData(" 5", "\" 5\"")]
    [InlineData("NaN", "\"NaN\"")]
    [InlineData("true", "\"true\"")]
    [InlineData("\"5\"", "5")]
    [InlineData("\"a,\"\"b\"\"\nc\"", "\"a,\\\"b\\\"\\nc\"")]
    [InlineData("\"\"\"\"", "\"\\\"\"")]
    [InlineData("a\\b\tc\x01", "\"a\\\\b\\tc\\u0001\"")]
    [InlineData("\xc3\xa9\xff", "\"\xc3\xa9\xff\"")]
    public void Cut_Cell_BecomesNumberOrString(string cell, string json)
    {
        for (int piece = 1; piece <= 5; piece++)
            Assert.Equal([new TakenRecord($$"""{"id":"a","x":{{json}}}""", 2)], Cut($"id,x\na,{cell}\n", piece: piece));
    }

    [Theory]
    [InlineData("id,x\na,\n", "{\"id\":\"a\"}")]
    [InlineData("id,x\na,\"\"", "{\"id\":\"a\"}")]
    [InlineData("id,x\r\n,5\r\n", "{\"x\":5}")]
    [InlineData("id,x\n,", "{}")]
    [InlineData("\"id\",\"x \"\"y\"\"\"\na,b", "{\"id\":\"a\",\"x \\\"y\\\"\":\"b\"}")]
    public void Cut_EmptyCell_IsAbsent(string text, string json)
    {
        for (int piece = 1; piece <= 5; piece++) Assert.Equal([new TakenRecord(json, 2)], Cut(text, piece: piece));
    }

    [Theory]
    [InlineData("id,x\na\n", "a", "1 cells where the header has 2")]
    [InlineData("id,x\na,b,c\r\n", "a,b,c", "3 cells where the header has 2")]
    [InlineData("id,x\na,5\" pipe\n", "a,5\" pipe", "a quote within a cell that does not begin with one")]
    [InlineData("id,x\na,\"b\"c\n", "a,\"b\"c", "text behind the quote that closes a cell")]
    [InlineData("id,x\na,\"b", "a,\"b", "a quote that is not closed")]
    [InlineData("id,x\n\nc,7\n", "", "1 cells where the header has 2", "{\"id\":\"c\",\"x\":7}")]
    [InlineData("id,x\na,\"b\nc,7\nd,8\n", "a,\"b", "a quote that is not closed", "{\"id\":\"c\",\"x\":7}", "{\"id\":\"d\",\"x\":8}")]
    [InlineData("id,x\na,\"b\nc,\"7\"\n", "a,\"b", "text behind the quote that closes a cell", "{\"id\":\"c\",\"x\":7}")]
    public void Cut_MalformedRow_IsARejectAndCostsOneLine(string text, string rejected, string detail, params string[] others)
    {
        for (int piece = 1; piece <= text.Length; piece++)
        {
            Assert.Equal(
                [
                    new TakenRecord(rejected, 2, RejectReason.RowMalformed, detail),
                    .. others.Select((json, i) => new TakenRecord(json, i + 3)),
                ],
                Cut(text, piece: piece));
        }
    }

    [Theory]
    [InlineData("id,x\na,345678901\nc,7", RejectReason.TooLong, "11 bytes; at most 10 are allowed", "a,34567890")]
    [InlineData("id,x\na,3456789012345678901\nc,7", RejectReason.TooLong, "21 bytes; at most 10 are allowed", "a,34567890")]
    [InlineData("id,x\na,\"45678901\nc,7", RejectReason.RowMalformed, "a quote that is not closed", "a,\"45678901")]
    [InlineData("id,x\na,\"456\n8901234567890\"\nc,7", RejectReason.RowMalformed, "no end of the row within 10 bytes", "a,\"456")]
    public void Cut_LongRow_IsAReject(string text, RejectReason reason, string detail, string shown)
    {
        var taken = Cut(text, maximumBytes: 10, piece: 3);

        if (reason == RejectReason.TooLong) Assert.Equal(new TakenRecord(shown, 2, reason, detail), taken[0]);
        else Assert.Equal(2, taken[0].Number);
        Assert.Equal("""{"id":"c","x":7}""", taken[^1].Text);
        Assert.All(taken[..^1], record => Assert.NotEqual(RejectReason.None, record.Reason));
    }

    [Theory]
    [InlineData("id,x,id,,x\n", "The header of quay.csv is wrong: columns 1 and 3 are both named 'id'; column 4 has no name; columns 2 and 5 are both named 'x'.")]
    [InlineData("", "quay.csv is empty; its first line must name the columns.")]
    [InlineData("id,\"x\n", "The header of quay.csv cannot be read: it has a quote that is not closed.")]
    public void CutHeader_WrongHeader_Throws(string text, string message) =>
        Assert.Equal(message, Assert.Throws<InvalidRecordingException>(() => Cut(text)).Message);

    // The Sep reader is a second, independent reader of RFC 4180.
    [Fact]
    public void Cut_AnyWellFormedRows_GivesTheCellsThatSepGives()
    {
        const int Columns = 3;
        var cell = Gen.Char["ab0,\"\n\ré "].Array[0, 5].Select(characters => new string(characters));
        var isQuoted = Gen.Bool;
        var row = Gen.Select(cell, isQuoted).Array[Columns];
        Gen.Select(row.Array[0, 8], Gen.Int[1, 30], Gen.Bool).Sample((rows, piece, crLf) =>
        {
            string lineEnd = crLf ? "\r\n" : "\n";
            var text = new StringBuilder("c0,c1,c2" + lineEnd);
            foreach (var cells in rows)
                text.AppendJoin(',', cells.Select(c => Write(c.Item1, c.Item2))).Append(lineEnd);

            var expected = new List<string[]>();
            using (var reader = Sep.New(',').Reader(o => o with { Unescape = true, DisableColCountCheck = false }).FromText(text.ToString()))
            {
                foreach (var sepRow in reader)
                    expected.Add([sepRow[0].ToString(), sepRow[1].ToString(), sepRow[2].ToString()]);
            }

            string latin = Encoding.Latin1.GetString(Encoding.UTF8.GetBytes(text.ToString()));
            var taken = Cut(latin, piece: piece);

            Assert.Equal(expected, taken.Select(record => Cells(record.Text)));
        }, seed: "0000000000000", iter: 2000);

        static string Write(string cell, bool isQuoted) => isQuoted || cell.AsSpan().IndexOfAny(",\"\r\n") >= 0
            ? $"\"{cell.Replace("\"", "\"\"", StringComparison.Ordinal)}\""
            : cell;

        static string[] Cells(string latin)
        {
            using var json = JsonDocument.Parse(Encoding.Latin1.GetBytes(latin));
            return [.. Enumerable.Range(0, Columns).Select(i =>
                json.RootElement.TryGetProperty(string.Create(CultureInfo.InvariantCulture, $"c{i}"), out var value)
                    ? value.ValueKind == JsonValueKind.Number ? value.GetRawText() : value.GetString()!
                    : "")];
        }
    }

    [Fact]
    public void Cut_GarbageInAnyPieces_TakesEveryByteAndGivesTheSame()
    {
        var text = Gen.Char["a,\"\n\r"].Array[0, 80].Select(characters => "c0,c1\n" + new string(characters));
        Gen.Select(text, Gen.Int[1, 20]).Sample((text, piece) =>
            Assert.Equal(Cut(text, maximumBytes: 200), Cut(text, maximumBytes: 200, piece)), seed: "0000000000000", iter: 5000);
    }
}
