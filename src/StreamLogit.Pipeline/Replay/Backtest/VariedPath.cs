using System.Collections.Immutable;
using StreamLogit.Pipeline.Definition;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>A value of the definition and what to try in its place.</summary>
/// <param name="Path">Where it stands, as overrides write it.</param>
/// <param name="Values">What to try, each as an override writes it.</param>
public sealed record VariedPath(string Path, ImmutableArray<string> Values)
{
    /// <summary>Reads <c>path=value,value</c>. A comma within brackets, braces or quotes belongs to a value.</summary>
    /// <exception cref="FormatException">It is not written so.</exception>
    public static VariedPath Parse(string text)
    {
        if (DefinitionPath.Parse(text) is not var (_, length) || length >= text.Length - 1)
            throw new FormatException("it is written path=value,value, as learning.switchRate=0,1e-4,1e-3");
        var values = Split(text[(length + 1)..]);
        if (values.Any(value => value.Length == 0)) throw new FormatException("a value is empty");
        if (values.Distinct(StringComparer.Ordinal).Count() < values.Length) throw new FormatException("a value stands there twice");
        return new VariedPath(text[..length], values);
    }

    /// <summary>Every choice of one value for each path, as overrides; the last path varies fastest.</summary>
    public static IEnumerable<ImmutableArray<string>> Product(IReadOnlyList<VariedPath> paths)
    {
        IEnumerable<ImmutableArray<string>> product = paths.Count == 0 ? [] : [[]];
        foreach (var path in paths)
            product = product.SelectMany(chosen => path.Values.Select(value => chosen.Add($"{path.Path}={value}")));
        return product;
    }

    private static ImmutableArray<string> Split(string text)
    {
        var values = ImmutableArray.CreateBuilder<string>();
        int depth = 0, start = 0;
        bool isQuoted = false;
        for (int i = 0; i < text.Length; i++)
        {
            switch (text[i])
            {
                case '\\' when isQuoted: i++; break;
                case '"': isQuoted = !isQuoted; break;
                case '[' or '{' when !isQuoted: depth++; break;
                case ']' or '}' when !isQuoted: depth--; break;
                case ',' when !isQuoted && depth == 0:
                    values.Add(text[start..i].Trim());
                    start = i + 1;
                    break;
            }
        }
        values.Add(text[start..].Trim());
        return values.ToImmutable();
    }
}
