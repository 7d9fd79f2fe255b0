using System.Security.Cryptography;
using System.Text;

namespace StreamLogit.Pipeline.Replay.Report;

/// <summary>The style of the report, and the policy that lets a browser use it and nothing else.</summary>
internal static class ReportStyle
{
    public const string Css = """
        :root{color-scheme:light dark;--paper:#fbfaf6;--ink:#20262b;--soft:#59636b;--rule:#d9d5c8;--card:#fff;--before:#8a5a00;--after:#00657e;--good:#17663a;--bad:#a32035}
        @media(prefers-color-scheme:dark){:root{--paper:#14181b;--ink:#e7e4da;--soft:#a5afb6;--rule:#363f45;--card:#1b2125;--before:#e8b04a;--after:#63c6dd;--good:#7fd09f;--bad:#ff9aa6}}
        *{box-sizing:border-box}
        body{margin:0;background:var(--paper);color:var(--ink);font:16px/1.55 Charter,"Bitstream Charter",Cambria,Georgia,serif}
        main,header,footer{max-width:1080px;margin:0 auto;padding:0 24px}
        header{padding-top:40px}
        header p{color:var(--soft);margin:0}
        h1{font-size:2rem;line-height:1.2;margin:.3em 0 .6em;overflow-wrap:anywhere;text-wrap:balance}
        h2{font-size:1.25rem;margin:2.4em 0 .6em;padding-top:.7em;border-top:3px solid var(--ink)}
        p{max-width:72ch;overflow-wrap:anywhere}
        .note{color:var(--soft);font-size:.92rem}
        .scroll{overflow-x:auto;background:var(--card);border:1px solid var(--rule)}
        .scroll:focus-visible{outline:3px solid var(--after);outline-offset:2px}
        table{border-collapse:collapse;width:100%;font:.86rem/1.4 ui-sans-serif,system-ui,sans-serif;font-variant-numeric:tabular-nums}
        caption{text-align:left;padding:10px 12px;color:var(--soft);max-width:min(1010px,calc(100vw - 60px))}
        th,td{padding:6px 12px;text-align:right;border-top:1px solid var(--rule);white-space:nowrap}
        th:first-child{text-align:left}
        tbody th{font-weight:600;white-space:normal;overflow-wrap:anywhere;min-width:18em}
        thead th{vertical-align:bottom;white-space:normal;color:var(--soft);font-weight:600}
        .narrow tbody th{min-width:0}
        .better{color:var(--good);font-weight:700}
        .worse{color:var(--bad);font-weight:700}
        .pair{display:grid;grid-template-columns:repeat(auto-fit,minmax(320px,1fr));gap:24px;align-items:start}
        .scroll+.scroll{margin-top:16px}
        figure{margin:0}
        figcaption{color:var(--soft);font-size:.92rem;margin-top:.4em}
        svg{display:block;width:100%;height:auto;background:var(--card);border:1px solid var(--rule)}
        .grid{stroke:var(--rule)}
        .zero{stroke:var(--soft);stroke-dasharray:4 4}
        .tick{fill:var(--soft);font:12px ui-sans-serif,system-ui,sans-serif}
        .end{text-anchor:end}
        .middle{text-anchor:middle}
        polyline{fill:none;stroke-linejoin:round}
        .main{stroke:var(--after);stroke-width:2.5}
        .other{stroke:var(--soft);stroke-width:1;opacity:.55}
        .before{fill:none;stroke:var(--before);stroke-width:2}
        .after{fill:var(--after)}
        .key-before{color:var(--before);font-weight:700}
        .key-after{color:var(--after);font-weight:700}
        dl{display:grid;grid-template-columns:max-content 1fr;gap:4px 20px;font:.86rem/1.5 ui-sans-serif,system-ui,sans-serif}
        dt{color:var(--soft)}
        dd{margin:0;overflow-wrap:anywhere}
        code,pre{font:.84rem/1.5 ui-monospace,"DejaVu Sans Mono",monospace}
        pre{background:var(--card);border:1px solid var(--rule);padding:14px;overflow-x:auto;margin:.6em 0}
        summary{cursor:pointer;padding:6px 0}
        summary:focus-visible,pre:focus-visible{outline:3px solid var(--after);outline-offset:2px}
        footer{padding-top:32px;padding-bottom:48px;color:var(--soft);font-size:.92rem}
        @media print{body{background:#fff;color:#000}.scroll,pre{overflow:visible}}
        """;

    /// <summary>Nothing is loaded from anywhere, no script runs, and only this style applies.</summary>
    public static string Policy { get; } =
        $"default-src 'none'; style-src 'sha256-{Convert.ToBase64String(SHA256.HashData(Encoding.UTF8.GetBytes(Css)))}'; base-uri 'none'; form-action 'none'";
}
