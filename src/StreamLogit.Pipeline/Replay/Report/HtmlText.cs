using System.Globalization;
using System.Net;
using System.Text;

namespace StreamLogit.Pipeline.Replay.Report;

/// <summary>HTML that is put together. Every text goes in escaped; only constant markup goes in as it is.</summary>
internal sealed class HtmlText
{
    private readonly StringBuilder _html = new();

    /// <summary>Adds markup of the program's own.</summary>
    public HtmlText Markup(string markup)
    {
        _html.Append(markup);
        return this;
    }

    /// <summary>Adds text, also within the quotes of an attribute.</summary>
    public HtmlText Text(string text)
    {
        _html.Append(WebUtility.HtmlEncode(text));
        return this;
    }

    /// <summary>Adds an element that holds text.</summary>
    public HtmlText Element(string name, string text) => Markup($"<{name}>").Text(text).Markup($"</{name}>");

    /// <summary>Adds a number of a drawing, with two decimals at most.</summary>
    public HtmlText Number(double value)
    {
        _html.Append(Math.Round(value, 2).ToString(CultureInfo.InvariantCulture));
        return this;
    }

    /// <inheritdoc/>
    public override string ToString() => _html.ToString();
}
