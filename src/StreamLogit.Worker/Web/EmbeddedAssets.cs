using System.Collections.Frozen;
using System.Reflection;
using System.Security.Cryptography;
using Microsoft.Net.Http.Headers;

namespace StreamLogit.Worker.Web;

/// <summary>The files of the page, which are part of the program.</summary>
internal static class EmbeddedAssets
{
    private const string Prefix = "page/";
    private static readonly FrozenDictionary<string, EmbeddedAsset> Files = Read();

    /// <summary>The file, or null where there is none of that name.</summary>
    public static EmbeddedAsset? Get(string name) => Files.GetValueOrDefault(name);

    private static FrozenDictionary<string, EmbeddedAsset> Read()
    {
        var assembly = Assembly.GetExecutingAssembly();
        return assembly.GetManifestResourceNames().Where(name => name.StartsWith(Prefix, StringComparison.Ordinal))
            .ToFrozenDictionary(name => name[Prefix.Length..], name => Read(assembly, name));
    }

    private static EmbeddedAsset Read(Assembly assembly, string name)
    {
        using var stream = assembly.GetManifestResourceStream(name)!;
        byte[] bytes = new byte[stream.Length];
        stream.ReadExactly(bytes);
        return new EmbeddedAsset(bytes, TypeOf(name), new EntityTagHeaderValue($"\"{Convert.ToHexStringLower(SHA256.HashData(bytes).AsSpan(0, 12))}\""));
    }

    private static string TypeOf(string name) => Path.GetExtension(name) switch
    {
        ".html" => "text/html; charset=utf-8",
        ".css" => "text/css; charset=utf-8",
        ".js" => "text/javascript; charset=utf-8",
        ".svg" => "image/svg+xml",
        _ => "text/plain; charset=utf-8",
    };
}
