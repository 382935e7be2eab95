"""Answers to what went wrong: a page with one sentence, or the one error shape under /api."""

from http import HTTPStatus

from fastapi import FastAPI, Request, Response
from fastapi.exceptions import RequestValidationError
from fastapi.responses import JSONResponse
from starlette.exceptions import HTTPException

from server.pages.rendering import render
from server.station.edits import Conflict
from server.station.faults import BadStation, Fault, errors_json, quoted
from server.station.fields import find

SENTENCES = {
    400: "The request cannot be read.",
    404: "There is no page at this address.",
    405: "This address does not take that kind of request.",
}
TITLES = {403: "Not allowed", 404: "Not found", 409: "Changed elsewhere", 413: "Too large"}


def install(app: FastAPI) -> None:
    """Make the application answer with this module's pages."""
    app.add_exception_handler(HTTPException, _on_http)
    app.add_exception_handler(RequestValidationError, _on_request)
    app.add_exception_handler(BadStation, _on_bad_station)
    app.add_exception_handler(Conflict, _on_conflict)


def is_api(request: Request) -> bool:
    """Whether a program asks, and is answered in JSON."""
    path, prefix = request.scope["path"], request.scope.get("root_path", "").rstrip("/")
    if prefix and path.startswith(prefix + "/"):
        path = path[len(prefix) :]
    return bool(path == "/api" or path.startswith("/api/"))


def refusal(request: Request, status: int, sentence: str) -> Response:
    """Return the answer that says `sentence`, in the shape that the asker reads."""
    return faults_answer(request, status, (Fault("", "", "", "", sentence),))


def faults_answer(request: Request, status: int, faults: tuple[Fault, ...]) -> Response:
    """Return the answer that says every fault, in the shape that the asker reads."""
    if is_api(request):
        return JSONResponse(errors_json(faults), status)
    title = TITLES.get(status, HTTPStatus(status).phrase.capitalize())
    context: dict[str, object] = {
        "title": title,
        "sentences": tuple(dict.fromkeys(fault.sentence for fault in faults)),
        "back": f"{request.scope.get('root_path', '').rstrip('/')}/stations",
    }
    return render(request, "problem.html", context, status=status)


def conflict_answer(conflict: Conflict) -> JSONResponse:
    """Return the API's answer to a change that met another one: 409 with both values."""
    node = find(conflict.path)
    sheet = node.sheet if node is not None and conflict.path else ""
    fault = Fault(conflict.path, sheet, "", "", conflict.sentence)
    error = {**fault.as_json(), **conflict.as_json()}
    return JSONResponse({"errors": [error]}, 409)


def _on_http(request: Request, problem: Exception) -> Response:
    if not isinstance(problem, HTTPException):
        raise problem
    standard = HTTPStatus(problem.status_code).phrase
    own = problem.detail if problem.detail and problem.detail != standard else ""
    sentence = own or SENTENCES.get(problem.status_code, standard + ".")
    answer = refusal(request, problem.status_code, sentence)
    for name, value in (problem.headers or {}).items():
        answer.headers[name] = value
    return answer


def _on_request(request: Request, problem: Exception) -> Response:
    if not isinstance(problem, RequestValidationError):
        raise problem
    faults = tuple(_fault_of(error) for error in problem.errors())
    return faults_answer(request, 422, faults)


def _fault_of(error: dict[str, object]) -> Fault:
    place = error.get("loc")
    names = [str(step) for step in place[1:]] if isinstance(place, tuple | list) else []
    name = ".".join(names) or "request"
    message = str(error.get("msg", "")) or "it cannot be read"
    given = quoted(error.get("input", ""))
    return Fault(
        name,
        "",
        given,
        message,
        f"{name}: {message[:1].lower()}{message[1:]}; {given} was given.",
    )


def _on_bad_station(request: Request, problem: Exception) -> Response:
    if not isinstance(problem, BadStation):
        raise problem
    return faults_answer(request, 422, problem.faults)


def _on_conflict(request: Request, problem: Exception) -> Response:
    if not isinstance(problem, Conflict):
        raise problem
    return (
        conflict_answer(problem) if is_api(request) else refusal(request, 409, problem.sentence)
    )
