// Stands before everything else in the copy that the test opens: what goes wrong is collected.
"use strict";
const failures = [];
addEventListener("error", (event) => failures.push(`error: ${event.message}`));
addEventListener("unhandledrejection", (event) => failures.push(`rejection: ${event.reason}`));
document.addEventListener("securitypolicyviolation", (event) => failures.push(`policy: ${event.violatedDirective} ${event.blockedURI}`));
for (const level of ["error", "warn"]) console[level] = (...words) => failures.push(`${level}: ${words.join(" ")}`);
