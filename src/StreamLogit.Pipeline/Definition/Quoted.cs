using System.Text.Encodings.Web;

namespace StreamLogit.Pipeline.Definition;

/// <summary>Names and values as messages show them: as JSON strings, on one line whatever they hold.</summary>
internal static class Quoted
{
    public static string Text(string text) => $"\"{JavaScriptEncoder.UnsafeRelaxedJsonEscaping.Encode(text)}\"";

    public static string List(IEnumerable<string> texts) => string.Join(", ", texts.Select(Text));
}
