using System.Text.Json;
using System.Text.Json.Nodes;
using Json.Schema;

namespace StreamLogit.Pipeline.Tests.Definition;

/// <summary>The JSON Schema in docs/.</summary>
internal static class SchemaFile
{
    private static readonly JsonSchema Schema = JsonSchema.FromText(Text);

    public static string Text => RepositoryFiles.Read("docs/stream-definition.schema.json");

    public static JsonObject Root { get; } = JsonNode.Parse(Text)!.AsObject();

    /// <summary>Whether the schema takes a definition, written with comments or without.</summary>
    public static bool Accepts(string definition)
    {
        using var document = JsonDocument.Parse(
            definition, new JsonDocumentOptions { CommentHandling = JsonCommentHandling.Skip, AllowTrailingCommas = true });
        return Schema.Evaluate(document.RootElement).IsValid;
    }

    /// <summary>The schemas that a node offers to choose from, by the names that they have in <c>$defs</c>.</summary>
    public static IEnumerable<string> Choices(JsonNode items) =>
        items["anyOf"]!.AsArray().Select(choice => choice!["$ref"]!.GetValue<string>()["#/$defs/".Length..]);

    /// <summary>The keys of an object.</summary>
    public static IEnumerable<string> Keys(JsonNode schema) => schema["properties"]!.AsObject().Select(property => property.Key);
}
