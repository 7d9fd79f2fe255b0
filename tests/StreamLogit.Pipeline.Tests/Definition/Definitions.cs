using System.Collections.Immutable;
using System.Text;
using StreamLogit.Pipeline.Definition;

namespace StreamLogit.Pipeline.Tests.Definition;

/// <summary>Reads definitions that tests write in place.</summary>
internal static class Definitions
{
    /// <summary>The folder that the definitions are said to stand in.</summary>
    public static string Folder { get; } = Path.Combine(Path.GetTempPath(), "definitions");

    /// <summary>The smallest definition there is.</summary>
    public const string Smallest = """{ "stream": "quay", "features": [ { "number": "amount" } ] }""";

    public static StreamDefinition Read(
        string json, string[]? set = null, Dictionary<string, string>? environment = null, DefinitionUse use = DefinitionUse.Replay) =>
        StreamDefinitionReader.Read(Encoding.UTF8.GetBytes(json), "quay.json", Folder, set, environment, use);

    /// <summary>The smallest definition with more keys, as <c>"labels": { "wait": "1d" }</c>.</summary>
    public static StreamDefinition ReadWith(string keys, DefinitionUse use = DefinitionUse.Replay) => Read(With(keys), use: use);

    public static string With(string keys) => $"{{ \"stream\": \"quay\", \"features\": [ {{ \"number\": \"amount\" }} ],\n{keys} }}";

    public static ImmutableArray<DefinitionError> Errors(
        string json, string[]? set = null, Dictionary<string, string>? environment = null, DefinitionUse use = DefinitionUse.Replay) =>
        Assert.Throws<DefinitionException>(() => Read(json, set, environment, use)).Errors;

    /// <summary>The only error of the smallest definition with more keys.</summary>
    public static DefinitionError ErrorWith(string keys, DefinitionUse use = DefinitionUse.Replay) => Assert.Single(Errors(With(keys), use: use));
}
