using Microsoft.AspNetCore.Http;
using Microsoft.Net.Http.Headers;

namespace StreamLogit.Worker.Web;

/// <summary>A file of the page.</summary>
/// <param name="Bytes">What it holds.</param>
/// <param name="ContentType">Its media type.</param>
/// <param name="Tag">Changes with the bytes.</param>
internal sealed record EmbeddedAsset(byte[] Bytes, string ContentType, EntityTagHeaderValue Tag)
{
    /// <summary>The answer with the file; a browser that has it already is told so.</summary>
    public IResult ToResult(HttpRequest request)
    {
        // A new version of the program has new files under the same names.
        request.HttpContext.Response.Headers.CacheControl = "no-cache";
        return TypedResults.Bytes(Bytes, ContentType, entityTag: Tag);
    }
}
