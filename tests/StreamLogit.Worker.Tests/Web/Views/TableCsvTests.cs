using System.Text;
using StreamLogit.Worker.Web.Views;

namespace StreamLogit.Worker.Tests.Web.Views;

public sealed class TableCsvTests
{
    [Theory]
    [InlineData("plain", "plain")]
    [InlineData("a,b", "\"a,b\"")]
    [InlineData("say \"x\"", "\"say \"\"x\"\"\"")]
    [InlineData("two\nlines", "\"two\nlines\"")]
    [InlineData("=1+2", "'=1+2")]
    [InlineData("+1", "'+1")]
    [InlineData("-1", "'-1")]
    [InlineData("@x,y", "\"'@x,y\"")]
    [InlineData("\tx", "'\tx")]
    public void Of_Text_CannotBreakOutOfItsCellOrBecomeAFormula(string text, string expected)
    {
        var table = new DataTable("t", "T", new DataColumn("text", "text", ColumnKind.Text));
        table.Add(text);

        Assert.Equal($"text\r\n{expected}\r\n", Encoding.UTF8.GetString(TableCsv.Of(table)));
    }

    [Fact]
    public void Of_NumbersAndNothing_AreWrittenInFullAndEmpty()
    {
        var table = new DataTable(
            "t", "T", new("a", "a", ColumnKind.Figure), new("b", "b", ColumnKind.Count), new("c", "c", ColumnKind.Figure), new("d", "d", ColumnKind.Time), new("e", "e", ColumnKind.Figure));
        table.Add(-0.1, 12L, double.NaN, null, 1.0 / 3);

        Assert.Equal("a,b,c,d,e\r\n-0.1,12,,,0.3333333333333333\r\n", Encoding.UTF8.GetString(TableCsv.Of(table)));
    }
}
